import { Nothing } from '../../../shared/contract/people.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { keepCheckpoint } from '../ledger/keep-checkpoint.ts'
import { makeBackup } from './make-backup.ts'
import { presentBackups } from './present.ts'
import { recordBackup } from './record-backup.ts'
import { pastKeeping, takeAwayBackups } from './take-away-backups.ts'

export const backupRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/backups',
    summary: 'list backups',
    access: 'keep backups',
    handle: async ({ em, services, held }) => ({ body: await presentBackups(em, services.config, held) }),
  }),
  route({
    method: 'post',
    path: '/backups',
    summary: 'make a backup',
    access: 'keep backups',
    costly: true,
    body: Nothing,
    handle: async (call) => {
      const { services, person, now, held } = call
      const { config, orm, files, keys } = services
      await orm.em.fork().transactional((em) => keepCheckpoint(em, { key: keys.current, now, occasion: 'backup' }))
      const made = await makeBackup({ orm, files: files.directory, folder: config.backupDir }, { now, occasion: 'asked' })
      const remove = (names: readonly string[]) => takeAwayBackups(config.backupDir, names)
      let past: string[] | null = null
      try {
        const answer = await call.act(async (em) => {
          past = await pastKeeping(config.backupDir, config.backupsKept, made.name)
          await recordBackup(em, { made, takenAway: past, person, now })
          await em.flush()
          return { status: 201, body: await presentBackups(em, config, held, past) }
        })
        // a repeat of the same request was answered from its receipt: the backup of the first one is there
        await remove(past ?? [made.name])
        return answer
      } catch (error) {
        await remove([made.name])
        throw error
      }
    },
  }),
]
