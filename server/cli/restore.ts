import { existsSync } from 'node:fs'
import { rm } from 'node:fs/promises'
import { join, resolve } from 'node:path'
import { parseArgs } from 'node:util'
import { readConfig, type Config } from '../config.ts'
import { proveBackup, type BackupProof } from '../modules/backups/prove-backup.ts'
import { restoreBackup } from '../modules/backups/restore-backup.ts'
import { whileHeld } from './on-database.ts'
import { Usage } from './usage.ts'

/** A backup by its path, or by its name in the folder of backups. */
function find(name: string, { backupDir }: Config): string {
  const found = [resolve(name), join(backupDir, name)].find((path) => existsSync(join(path, 'backup.json')))
  if (!found) throw new Error(`There is no backup "${name}" here or in ${backupDir}. "backup --list" names them.`)
  return found
}

const told = ({ record, entries, checkpoints, releases, images, files, migrated }: BackupProof) =>
  `Proven: the backup of ${record.madeAt}. ${entries} ledger entries and ${checkpoints} checkpoints hold; every file of ${releases} releases (${images} images) was made again, byte for byte as signed; ${files} stored files are as named.${migrated > 0 ? ` Its schema went through ${migrated} migrations.` : ''}\n`

/** Proves a backup, then puts it in the place of the workplace's database, which is kept aside. */
export async function restore(args: string[]): Promise<number> {
  const { positionals, values } = parseArgs({ args, allowPositionals: true, options: { 'only-prove': { type: 'boolean' } } })
  if (positionals.length !== 1) throw new Usage('restore takes one backup.')
  if (values['only-prove']) {
    const config = readConfig(process.env)
    const work = join(config.backupDir, 'proving')
    try {
      process.stdout.write(told(await proveBackup(find(positionals[0], config), work)))
    } finally {
      await rm(work, { recursive: true, force: true })
    }
    return 0
  }
  return whileHeld(async (config) => {
    const { proof, keptAside, replaced, privateKeyTaken, sealKeyMissing } = await restoreBackup(config, find(positionals[0], config), new Date())
    process.stdout.write(told(proof))
    process.stdout.write(`Restored into ${config.dataDir}.${keptAside ? ` The database that was there${replaced ? `, with ${replaced.entries} ledger entries,` : ''} is kept in ${keptAside}.` : ''}\n`)
    if (privateKeyTaken) process.stdout.write("The workplace's private key was taken from the backup.\n")
    if (sealKeyMissing) process.stdout.write('People of this workplace have a second factor, and second-factor.key, which opens them, is not here: put it beside the database, or let people sign in with recovery codes.\n')
    process.stdout.write('All sessions and open links were ended. What was done after the backup is undone, also ended roles, disabled people and revoked bench keys: look at those first.\n')
    return 0
  })
}
