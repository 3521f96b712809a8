import { existsSync } from 'node:fs'
import { join } from 'node:path'
import { parseArgs } from 'node:util'
import { readConfig } from '../config.ts'
import { listBackups } from '../modules/backups/backup-record.ts'
import { makeBackup } from '../modules/backups/make-backup.ts'
import { placesOf } from '../modules/backups/open-workplace.ts'
import { recordBackup } from '../modules/backups/record-backup.ts'
import { onDatabase } from './on-database.ts'
import { Usage } from './usage.ts'

const megabytes = (bytes: number) => `${(bytes / 1e6).toFixed(1)} MB`

async function list(): Promise<number> {
  const { backupDir } = readConfig(process.env)
  const { backups, unreadable } = await listBackups(backupDir)
  for (const b of backups) process.stdout.write(`${b.name}  ${b.occasion}, ${megabytes(b.bytes)}, ${b.ledger?.entries ?? 0} ledger entries, ${b.files} stored files${b.trouble.length > 0 ? `, LACKS ${b.trouble.length}` : ''}${b.privateKey ? ', with the private key' : ''}\n`)
  process.stdout.write(`${backups.length} backups in ${backupDir}${unreadable > 0 ? `, and ${unreadable} that can't be read` : ''}\n`)
  return 0
}

/** Makes a backup of a workplace that no server uses; a running one makes its own, daily and on the backups page. */
export async function backup(args: string[]): Promise<number> {
  const { values } = parseArgs({ args, options: { list: { type: 'boolean' }, 'with-private-key': { type: 'boolean' } } })
  if (values.list) {
    if (values['with-private-key']) throw new Usage('backup lists, or makes one.')
    return list()
  }
  const { database, files, privateKey, sealKey } = placesOf(readConfig(process.env))
  if (!existsSync(database)) throw new Error(`There is no workplace: ${database} does not exist. Set DETENT_DATA to its folder.`)
  if (values['with-private-key'] && !existsSync(privateKey)) throw new Error(`${privateKey} does not exist. No backup was made.`)
  const { folder, made } = await onDatabase(async (orm, config) => {
    const now = new Date()
    const one = await makeBackup({ orm, files, folder: config.backupDir }, { now, occasion: 'command', privateKey: values['with-private-key'] ? privateKey : null, sealKey: values['with-private-key'] && existsSync(sealKey) ? sealKey : null })
    await orm.em.fork().transactional((em) => recordBackup(em, { made: one, takenAway: [], person: null, now }))
    return { folder: config.backupDir, made: one }
  })
  const { record } = made
  process.stdout.write(`${join(folder, made.name)}\n${megabytes(record.database.bytes)}, ${record.ledger?.entries ?? 0} ledger entries, ${record.files.sha256.length} stored files.\n`)
  for (const trouble of record.trouble) process.stdout.write(`A stored file is ${trouble.what}: ${trouble.sha256}. Take it from an older backup.\n`)
  if (record.orphans.length > 0) process.stdout.write(`${record.orphans.length} stored files are named by nothing in the database; they are in the backup all the same.\n`)
  process.stdout.write(record.privateKey ? "It holds the workplace's private key and the key of the second factors: whoever has it can sign kits as this workplace.\n" : "The workplace's private key is not in it, nor the key that opens second factors. After a loss of the key files too, new ones are made: what was signed stays provable, and people sign in with recovery codes.\n")
  return record.trouble.length > 0 ? 1 : 0
}
