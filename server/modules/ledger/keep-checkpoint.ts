import type { KeyObject } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import type { CheckpointOccasion } from '../../../shared/contract/ledger.ts'
import { signCheckpoint } from './checkpoint-line.ts'
import { LedgerCheckpoint } from './ledger-checkpoint.entity.ts'
import { LedgerEntry } from './ledger-entry.entity.ts'

/**
 * Signs the ledger's present end, in the transaction of the act it belongs to.
 *
 * @returns null when the ledger is empty, or when a checkpoint of its present end is there already
 */
export async function keepCheckpoint(em: EntityManager, { key, now, occasion }: { key: KeyObject; now: Date; occasion: CheckpointOccasion }): Promise<LedgerCheckpoint | null> {
  if (!em.isInTransaction()) throw new Error('checkpoints are kept inside the transaction of their act')
  const [head] = await em.find(LedgerEntry, {}, { orderBy: { sequence: 'desc' }, limit: 1, disableIdentityMap: true })
  const [newest] = await em.find(LedgerCheckpoint, {}, { orderBy: { id: 'desc' }, limit: 1 })
  if (!head || newest?.hash === head.hash) return null
  const { sequence, hash, keyId, signature } = signCheckpoint(head, { at: now, occasion, key })
  return em.create(LedgerCheckpoint, { sequence, hash, at: now, occasion, keyId, signature })
}
