import type { KeyObject } from 'node:crypto'
import canonicalize from 'canonicalize'
import { checkpointOccasions, type CheckpointOccasion } from '../../../shared/contract/ledger.ts'
import { keyId, signText, verifyText } from '../../exports/sign-manifest.ts'

export const CHECKPOINT_TYPE = 'detent ledger checkpoint 1'

/** What a checkpoint states: the ledger had this last entry at this time. */
export interface CheckpointStatement {
  type: typeof CHECKPOINT_TYPE
  sequence: number
  hash: string
  /** ISO 8601 */
  at: string
  occasion: CheckpointOccasion
  /** of the key it is signed with */
  keyId: string
}

export interface Checkpoint extends CheckpointStatement {
  /** Ed25519 (RFC 8032) over the statement in RFC 8785 form, base64 */
  signature: string
}

/** The signed text: the statement alone, in RFC 8785 form. */
const signedText = ({ type, sequence, hash, at, occasion, keyId: key }: CheckpointStatement): string => canonicalize({ type, sequence, hash, at, occasion, keyId: key })!

export function signCheckpoint(head: { sequence: number; hash: string }, { at, occasion, key }: { at: Date; occasion: CheckpointOccasion; key: KeyObject }): Checkpoint {
  const statement: CheckpointStatement = { type: CHECKPOINT_TYPE, sequence: head.sequence, hash: head.hash, at: at.toISOString(), occasion, keyId: keyId(key) }
  return { ...statement, signature: Buffer.from(signText(signedText(statement), key)).toString('base64') }
}

export const isSignedBy = (checkpoint: Checkpoint, publicKey: KeyObject): boolean =>
  keyId(publicKey) === checkpoint.keyId && verifyText(signedText(checkpoint), Buffer.from(checkpoint.signature, 'base64'), publicKey)

/** One line of an exported file; without its `signature` it is what the signature covers. */
export const checkpointLine = (checkpoint: Checkpoint): string => `${canonicalize({ ...checkpoint })}\n`

export type LineReading = { kind: 'checkpoint'; checkpoint: Checkpoint } | { kind: 'refused'; why: string }

const isHash = (v: unknown): v is string => typeof v === 'string' && /^[0-9a-f]{64}$/.test(v)

/** Reads one line of an exported file. */
export function readCheckpointLine(line: string): LineReading {
  let json: unknown
  try {
    json = JSON.parse(line)
  } catch {
    return { kind: 'refused', why: 'it is no JSON' }
  }
  const c = (typeof json === 'object' && json !== null ? json : {}) as Partial<Record<keyof Checkpoint, unknown>>
  if (c.type !== CHECKPOINT_TYPE) return { kind: 'refused', why: `its type is not "${CHECKPOINT_TYPE}"` }
  if (!Number.isSafeInteger(c.sequence) || (c.sequence as number) < 1) return { kind: 'refused', why: 'its sequence is no entry number' }
  if (!isHash(c.hash) || !isHash(c.keyId)) return { kind: 'refused', why: 'its hash or keyId is no SHA-256 in hex' }
  if (typeof c.at !== 'string' || Number.isNaN(Date.parse(c.at)) || typeof c.signature !== 'string') return { kind: 'refused', why: 'its time or signature cannot be read' }
  if (!checkpointOccasions.includes(c.occasion as CheckpointOccasion)) return { kind: 'refused', why: 'its occasion is unknown' }
  return { kind: 'checkpoint', checkpoint: { type: CHECKPOINT_TYPE, sequence: c.sequence as number, hash: c.hash, at: c.at, occasion: c.occasion as CheckpointOccasion, keyId: c.keyId, signature: c.signature } }
}
