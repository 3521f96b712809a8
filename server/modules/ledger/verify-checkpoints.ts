import { createPublicKey, type KeyObject } from 'node:crypto'
import type { EntityManager } from '@mikro-orm/core'
import type { CheckpointsVerdict } from '../../../shared/contract/ledger.ts'
import { keyId } from '../../exports/sign-manifest.ts'
import { WorkplaceKey } from '../keys/workplace-key.entity.ts'
import { isSignedBy, readCheckpointLine, type Checkpoint } from './checkpoint-line.ts'
import { LedgerEntry } from './ledger-entry.entity.ts'
import { allCheckpoints } from './read-checkpoints.ts'

/** The workplace's public keys by their name. */
async function keysOf(em: EntityManager): Promise<Map<string, KeyObject>> {
  const rows = await em.fork().find(WorkplaceKey, {})
  return new Map(rows.map((row) => createPublicKey(row.publicKey)).map((key) => [keyId(key), key]))
}

interface Given {
  /** where it stands, to be named: a line of a file */
  line: number
  checkpoint: Checkpoint
}

/** What speaks against one checkpoint; null when the ledger is as it states. */
async function against(em: EntityManager, { checkpoint }: Given, keys: ReadonlyMap<string, KeyObject>, last: number): Promise<string | null> {
  const { sequence, at, keyId: by } = checkpoint
  const key = keys.get(by)
  if (!key) return `it is signed with the key ${by}, which is none of this workplace's: another workplace's file, or the database was written anew`
  if (!isSignedBy(checkpoint, key)) return 'its signature does not hold: the file was altered'
  if (sequence > last) return `the ledger ends at entry ${last}, and on ${at} it reached entry ${sequence}: it was cut short, or restored from a backup of before`
  const entry = await em.fork().findOne(LedgerEntry, { sequence })
  if (entry?.hash !== checkpoint.hash) return `entry ${sequence} is not the one that stood there on ${at}: the ledger was written anew at this entry or before`
  return null
}

/** Holds checkpoints against the ledger, in the order of the ledger; the first that does not fit is named, and where the trouble lies between. */
async function hold(em: EntityManager, given: readonly Given[], extraKeys: readonly KeyObject[]): Promise<CheckpointsVerdict> {
  const keys = new Map([...(await keysOf(em)), ...extraKeys.map((key) => [keyId(key), key] as const)])
  const [head] = await em.fork().find(LedgerEntry, {}, { orderBy: { sequence: 'desc' }, limit: 1 })
  const ordered = [...given].sort((a, b) => a.checkpoint.sequence - b.checkpoint.sequence || a.line - b.line)
  let good = 0
  for (const one of ordered) {
    const why = await against(em, one, keys, head?.sequence ?? 0)
    if (why) return { holds: false, checkpoints: given.length, line: one.line, why, goodUpTo: good }
    good = one.checkpoint.sequence
  }
  return { holds: true, checkpoints: given.length, newest: ordered.at(-1)?.checkpoint.at ?? null, upTo: good }
}

/**
 * Holds an exported file of checkpoints, kept elsewhere, against the ledger.
 *
 * @param publicKeys  further keys that are trusted, got another way than from this database
 */
export async function verifyCheckpointFile(em: EntityManager, text: string, publicKeys: readonly KeyObject[] = []): Promise<CheckpointsVerdict> {
  const lines = text.split('\n').map((line, i) => ({ line: i + 1, text: line.trim() })).filter((l) => l.text !== '')
  const given: Given[] = []
  for (const { line, text: one } of lines) {
    const reading = readCheckpointLine(one)
    if (reading.kind === 'refused') return { holds: false, checkpoints: lines.length, line, why: `${reading.why}: the file is no export of checkpoints, or was altered`, goodUpTo: 0 }
    given.push({ line, checkpoint: reading.checkpoint })
  }
  if (given.length === 0) return { holds: false, checkpoints: 0, line: 1, why: 'the file holds no checkpoint', goodUpTo: 0 }
  return hold(em, given, publicKeys)
}

/** Holds the workplace's own checkpoints against the ledger. Whoever can write in the database can take them out: those kept elsewhere are the proof. */
export async function verifyOwnCheckpoints(em: EntityManager): Promise<CheckpointsVerdict> {
  const given: Given[] = []
  for await (const checkpoint of allCheckpoints(em)) given.push({ line: given.length + 1, checkpoint })
  return hold(em, given, [])
}
