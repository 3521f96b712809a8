import type { EntityManager } from '@mikro-orm/core'
import type { CheckpointPage } from '../../../shared/contract/ledger.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { CHECKPOINT_TYPE, checkpointLine, type Checkpoint } from './checkpoint-line.ts'
import { LedgerCheckpoint } from './ledger-checkpoint.entity.ts'

const pageSize = 1000
/** Newest ones shown on the page; the export holds all. */
const shown = 20

export const asCheckpoint = (row: LedgerCheckpoint): Checkpoint => ({ type: CHECKPOINT_TYPE, sequence: row.sequence, hash: row.hash, at: row.at.toISOString(), occasion: row.occasion, keyId: row.keyId, signature: row.signature })

/** Every checkpoint in the order it was made, page by page. */
export async function* allCheckpoints(em: EntityManager): AsyncGenerator<Checkpoint> {
  let after = 0
  for (;;) {
    const page = await em.fork().find(LedgerCheckpoint, { id: { $gt: after } }, { orderBy: { id: 'asc' }, limit: pageSize })
    for (const row of page) yield asCheckpoint(row)
    if (page.length < pageSize) return
    after = page[page.length - 1].id
  }
}

/** Every checkpoint as JSON lines, to be kept elsewhere. */
export async function exportCheckpoints(em: EntityManager): Promise<Uint8Array> {
  const lines: string[] = []
  for await (const checkpoint of allCheckpoints(em)) lines.push(checkpointLine(checkpoint))
  return Buffer.from(lines.join(''))
}

export async function readCheckpoints(em: EntityManager, held: readonly HeldRole[]): Promise<CheckpointPage> {
  const rows = await em.find(LedgerCheckpoint, {}, { orderBy: { id: 'desc' }, limit: shown })
  return {
    checkpoints: rows.map((row) => ({ sequence: row.sequence, hash: row.hash, at: row.at.toISOString(), occasion: row.occasion, keyId: row.keyId })),
    total: await em.count(LedgerCheckpoint),
    may: { sign: may(held, 'keep backups', null) },
  }
}
