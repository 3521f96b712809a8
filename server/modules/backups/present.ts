import type { EntityManager } from '@mikro-orm/core'
import type { BackupsPage } from '../../../shared/contract/backups.ts'
import type { Config } from '../../config.ts'
import { LedgerEntry } from '../ledger/ledger-entry.entity.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { listBackups } from './backup-record.ts'

/** @param going  names of backups that are about to be taken away */
export async function presentBackups(em: EntityManager, config: Config, held: readonly HeldRole[], going: readonly string[] = []): Promise<BackupsPage> {
  const { backups, unreadable } = await listBackups(config.backupDir)
  const [last] = await em.find(LedgerEntry, { act: { $in: ['backup made', 'backup failed'] } }, { orderBy: { sequence: 'desc' }, limit: 1 })
  return {
    backups: backups.filter((b) => !going.includes(b.name)),
    unreadable,
    folder: config.backupDir,
    kept: config.backupsKept,
    hour: config.backupHour,
    failed: last?.act === 'backup failed' ? { at: last.at.toISOString(), why: String(last.details.why) } : null,
    may: { make: may(held, 'keep backups', null) },
  }
}
