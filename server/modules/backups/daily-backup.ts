import type { Logger } from 'pino'
import type { Services } from '../../http/services.ts'
import { keepCheckpoint } from '../ledger/keep-checkpoint.ts'
import { LedgerEntry } from '../ledger/ledger-entry.entity.ts'
import { listBackups } from './backup-record.ts'
import { makeBackup } from './make-backup.ts'
import { recordBackup, recordFailure } from './record-backup.ts'
import { pastKeeping, takeAwayBackups } from './take-away-backups.ts'

/** How often the clock is looked at: a machine that slept, or whose clock was put right, is not late by more. */
const lookMs = 10 * 60_000
const hourMs = 3_600_000

/** The last moment at or before `now` at which the clock showed this hour. */
export function lastDue(now: Date, hour: number): Date {
  const due = new Date(now)
  due.setHours(hour, 0, 0, 0)
  if (due > now) due.setDate(due.getDate() - 1)
  return due
}

/** Makes the day's checkpoint and backup. @throws Error when none could be made; the ones before are kept */
export async function makeDailyBackup(services: Services): Promise<void> {
  const { config, orm, files, keys } = services
  const now = services.now()
  await orm.em.fork().transactional((em) => keepCheckpoint(em, { key: keys.current, now, occasion: 'daily' }))
  const made = await makeBackup({ orm, files: files.directory, folder: config.backupDir }, { now, occasion: 'daily' })
  const takenAway = await pastKeeping(config.backupDir, config.backupsKept, made.name)
  await orm.em.fork().transactional((em) => recordBackup(em, { made, takenAway, person: null, now }))
  await takeAwayBackups(config.backupDir, takenAway)
}

/** When a daily backup is wanted: one that was missed while the program was off is made up for, a failed one tried again each hour. */
export class DailyBackup {
  private readonly services: Services
  private readonly log: Logger
  private failedAt: Date | null = null
  private toldFor = 0

  constructor(services: Services, log: Logger) {
    this.services = services
    this.log = log
  }

  private async isDue(now: Date, due: Date): Promise<boolean> {
    if (this.failedAt && now >= this.failedAt && now.getTime() - this.failedAt.getTime() < hourMs) return false
    const { backups } = await listBackups(this.services.config.backupDir)
    // one from the future was made under another clock, and says nothing about today
    const times = backups.filter((b) => b.occasion === 'daily').map((b) => Date.parse(b.madeAt)).filter((t) => t <= now.getTime() + hourMs)
    const [first] = times.length > 0 ? [] : await this.services.orm.em.fork().find(LedgerEntry, {}, { orderBy: { sequence: 'asc' }, limit: 1 })
    const since = times.length > 0 ? Math.max(...times) : (first?.at.getTime() ?? Infinity)
    return since < due.getTime()
  }

  /** Looks at the clock, and makes a backup when one is due. */
  async look(): Promise<void> {
    const { config, orm, mailQueued } = this.services
    const now = this.services.now()
    if (config.backupHour === null) return
    const due = lastDue(now, config.backupHour)
    if (!(await this.isDue(now, due))) return
    try {
      await makeDailyBackup(this.services)
      this.failedAt = null
    } catch (error) {
      this.failedAt = now
      this.log.error({ err: error as Error }, 'the daily backup failed')
      if (this.toldFor === due.getTime()) return
      await orm.em.fork().transactional((em) => recordFailure(em, { why: (error as Error).message, now }))
      this.toldFor = due.getTime()
    }
    mailQueued()
  }
}

export interface BackupKeeper {
  /** finishes the backup in hand, then rests for good */
  stop(): Promise<void>
}

/** Makes daily backups for as long as the program runs. */
export function startDailyBackups(services: Services, log: Logger): BackupKeeper {
  const daily = new DailyBackup(services, log)
  let looking = Promise.resolve()
  const look = () => {
    looking = looking.then(() => daily.look()).catch((error: Error) => log.error({ err: error }, 'the daily backup failed; it is tried again'))
  }
  look()
  const timer = setInterval(look, lookMs)
  return {
    async stop() {
      clearInterval(timer)
      await looking
    },
  }
}
