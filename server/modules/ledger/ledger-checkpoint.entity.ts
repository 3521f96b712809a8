import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import type { CheckpointOccasion } from '../../../shared/contract/ledger.ts'

/**
 * The ledger's end at a moment, signed with the workplace's key. Immutable.
 *
 * Kept elsewhere, it shows that the ledger was cut short or written anew: a chain of hashes alone can be computed again by whoever has the file.
 */
export const LedgerCheckpoint = defineEntity({
  name: 'LedgerCheckpoint',
  properties: {
    id: p.integer().primary(),
    /** of the last entry at that moment */
    sequence: p.integer(),
    hash: p.string().length(64),
    at: p.datetime(),
    occasion: p.string().$type<CheckpointOccasion>(),
    keyId: p.string().length(64),
    /** Ed25519 over the statement in RFC 8785 form, base64 */
    signature: p.string().length(88),
  },
})
export type LedgerCheckpoint = InferEntity<typeof LedgerCheckpoint>
