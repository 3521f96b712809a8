import { copyFileSync, cpSync, existsSync, mkdirSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { createHash } from 'node:crypto'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { placeIn } from '../../../server/db/file-store.ts'
import { DatabaseInUse } from '../../../server/db/only-process.ts'
import { openDatabase } from '../../../server/db/orm.ts'
import { inBackup, type BackupRecord } from '../../../server/modules/backups/backup-record.ts'
import { makeBackup } from '../../../server/modules/backups/make-backup.ts'
import { proveBackup } from '../../../server/modules/backups/prove-backup.ts'
import { restoreBackup } from '../../../server/modules/backups/restore-backup.ts'
import { LedgerEntry } from '../../../server/modules/ledger/ledger-entry.entity.ts'
import { verifyLedger } from '../../../server/modules/ledger/verify-ledger.ts'
import { Link } from '../../../server/modules/people/link.entity.ts'
import { SessionRecord } from '../../../server/modules/people/session.entity.ts'
import { aFolder } from '../../db/a-folder.ts'
import { aKeptWalker, type KeptWalker } from './a-kept-workplace.ts'

const now = new Date('2026-04-01T12:00:00Z')
const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex')

/** Alters a copy of a backup by SQL, and makes its record fit, as somebody would who hides what they did. */
async function altered(w: KeptWalker, name: string, statements: string[]): Promise<string> {
  const backup = join(aFolder(), 'altered')
  cpSync(join(w.backupDir, name), backup, { recursive: true })
  const file = join(backup, inBackup.database)
  const orm = await openDatabase(file)
  for (const sql of statements) await orm.em.getConnection().execute(sql)
  await orm.em.getConnection().execute('pragma wal_checkpoint(truncate)')
  await orm.close(true)
  refitRecord(backup)
  return backup
}

function refitRecord(backup: string) {
  const file = join(backup, inBackup.record)
  const record = JSON.parse(readFileSync(file, 'utf8')) as BackupRecord
  record.database.sha256 = sha256(readFileSync(join(backup, inBackup.database)))
  writeFileSync(file, JSON.stringify(record))
}

const anyTrigger = (table: string) => [`drop trigger ${table}_no_update`, `drop trigger ${table}_no_delete`]

describe('proving a backup', () => {
  it('makes every file of every release again, and counts what it proved', async () => {
    const w = await aKeptWalker()
    const { entries } = await w.head()
    const { name, record } = await w.backUp()
    const work = join(aFolder(), 'work')
    expect(await proveBackup(join(w.backupDir, name), work)).toEqual({ record, entries, checkpoints: 1, releases: 1, images: 2, files: 1, migrated: 0 })
    expect(readdirSync(work).sort()).toEqual(['detent.sqlite', 'files'])
  })

  it('refuses what was altered, and says what', async () => {
    const w = await aKeptWalker()
    const { name } = await w.backUp()
    const proof = async (backup: string) => {
      const work = join(aFolder(), 'work')
      const why = await proveBackup(backup, work).then(() => 'proven', (error: Error) => error.message)
      expect(existsSync(work)).toBe(false)
      return why
    }
    const byHand = (edit: (backup: string) => void) => {
      const backup = join(aFolder(), 'edited')
      cpSync(join(w.backupDir, name), backup, { recursive: true })
      edit(backup)
      return proof(backup)
    }
    const flip = (file: string, at: number) => {
      const bytes = readFileSync(file)
      bytes[at] ^= 4
      writeFileSync(file, bytes)
    }
    expect(await byHand((b) => flip(join(b, inBackup.database), 5000))).toContain('its database has another SHA-256 than when it was made')
    expect(await byHand((b) => rmSync(join(b, inBackup.database)))).toContain('its database is missing')
    expect(await byHand((b) => rmSync(placeIn(join(b, 'files'), w.imageSha256)))).toContain(`its stored file ${w.imageSha256} is missing`)
    // The hard link shares its bytes with the store: a second file takes its place.
    expect(await byHand((b) => writeFileSync(placeIn(join(b, 'files'), w.imageSha256), 'x'))).toContain(`its stored file ${w.imageSha256} is altered`)
    expect(await byHand((b) => rmSync(join(b, inBackup.record)))).toContain('no finished backup')
    expect(await byHand((b) => writeFileSync(join(b, inBackup.record), '{"form":2}'))).toContain('no record of a backup')
    expect(await byHand((b) => {
      writeFileSync(join(b, inBackup.database), 'no database at all')
      refitRecord(b)
    })).toContain('file is not a database')
    const hidden = (statements: string[]) => altered(w, name, statements).then(proof)
    expect(await hidden([...anyTrigger('ledger_entry'), "update ledger_entry set act = 'x' where sequence = 3"])).toContain('the ledger breaks at entry 3: its content does not match its hash')
    expect(await hidden([...anyTrigger('ledger_entry'), 'delete from ledger_entry where sequence > 3'])).toContain('ledger entries, and it holds 3')
    expect(await hidden([...anyTrigger('ledger_checkpoint'), "update ledger_checkpoint set at = at + 1"])).toContain('a checkpoint does not fit the ledger')
    expect(await hidden(['pragma foreign_keys = off', 'delete from machine'])).toContain('refer to rows that are not there')
    expect(await hidden([...anyTrigger('release_joint'), "update release_joint set image = cast(x'00' || substr(image, 2) as blob), image_sha256 = image_sha256 where id = 2"])).toMatch(/The image of r1-knee of? ?.*is not what was signed: the stored bytes do not match/)
    expect(await hidden([...anyTrigger('revision'), "update revision set content = replace(content, '\"value\":', '\"value\": 1e1 ,\"was\":') where id = 1"])).toMatch(/is not what was signed|does not hold/)
    expect(await hidden([...anyTrigger('release'), "update release set content = content || ' '"])).toContain('does not match the hash that was signed')
    expect(await hidden([...anyTrigger('release_joint'), 'delete from release_joint where id = 2'])).toContain('has no image for r1-knee')
    expect(await hidden([...anyTrigger('release_kit'), "update release_kit set manifest = replace(manifest, 'hinge', 'hingo')"])).toContain('The manifest of Dunlin 1.0.0 is not what was signed')
    expect(await hidden([`update firmware_version set image_sha256 = '${'a'.repeat(64)}'`])).toContain(`the stored file ${'a'.repeat(64)} is missing`)
  }, 180_000)
})

describe('restoring', () => {
  /** A data folder with a database of its own that has other acts than the backup. */
  async function aUsedFolder(w: KeptWalker) {
    const dataDir = aFolder()
    const later = join(aFolder(), 'later')
    const { name } = await w.backUp()
    cpSync(join(w.backupDir, name), later, { recursive: true })
    copyFileSync(join(later, inBackup.database), join(dataDir, 'detent.sqlite'))
    return dataDir
  }

  it('puts the proven copy in place, keeps the old database aside, and tells the ledger', async () => {
    const w = await aKeptWalker()
    const first = await w.backUp()
    const old = await w.head()
    w.at('2026-03-05T09:00:00Z')
    await w.engineer.post('/api/session').send({}).expect(400)
    const inviter = await w.as('administrator')
    await inviter.post('/api/people', { name: 'Newly Invited', email: 'newly@dunlin.example', roles: [] }).expect(201)
    const newer = await w.head()
    expect(newer.entries).toBeGreaterThan(old.entries)
    const dataDir = await aUsedFolder(w)
    mkdirSync(join(dataDir, 'files', w.imageSha256.slice(0, 2)), { recursive: true })
    writeFileSync(placeIn(join(dataDir, 'files'), w.imageSha256), 'altered since')
    const restored = await restoreBackup({ dataDir }, join(w.backupDir, first.name), now)
    expect(restored).toMatchObject({ keptAside: join(dataDir, 'replaced-2026-04-01T12-00-00Z'), replaced: newer, privateKeyTaken: false, proof: { releases: 1 } })
    expect(readdirSync(dataDir).sort()).toEqual(['detent.sqlite', 'files', 'replaced-2026-04-01T12-00-00Z'])
    expect(readFileSync(placeIn(join(dataDir, 'files'), w.imageSha256), 'utf8')).toBe('firmware of hinge 2.1.0')
    const orm = await openDatabase(join(dataDir, 'detent.sqlite'))
    const em = orm.em.fork()
    expect(await verifyLedger(em)).toMatchObject({ holds: true, entries: old.entries + 1 })
    expect(await em.findOne(LedgerEntry, { sequence: old.entries + 1 })).toMatchObject({ act: 'backup restored', previousHash: old.lastHash, details: { name: first.name, entries: old.entries, replaced: newer, keptAside: 'replaced-2026-04-01T12-00-00Z' } })
    expect(await em.count(SessionRecord)).toBe(0)
    expect(await em.count(Link, { usedAt: null, expiresAt: { $gt: now } })).toBe(0)
    await orm.close(true)
    const aside = await openDatabase(join(restored.keptAside!, 'detent.sqlite'))
    expect(await verifyLedger(aside.em.fork())).toMatchObject({ holds: true, entries: newer.entries, lastHash: newer.lastHash })
    await aside.close(true)
  })

  it('replaces nothing when the backup does not hold, or somebody serves the database', async () => {
    const w = await aKeptWalker()
    const { name } = await w.backUp()
    const dataDir = await aUsedFolder(w)
    await (await openDatabase(join(dataDir, 'detent.sqlite'))).close(true)
    const before = sha256(readFileSync(join(dataDir, 'detent.sqlite')))
    await expect(restoreBackup({ dataDir }, await altered(w, name, [...anyTrigger('ledger_entry'), "update ledger_entry set act = 'x' where sequence = 3"]), now)).rejects.toThrow('Nothing was replaced')
    const served = await openDatabase(join(dataDir, 'detent.sqlite'))
    await expect(restoreBackup({ dataDir }, join(w.backupDir, name), now)).rejects.toThrow(DatabaseInUse)
    await served.close(true)
    expect(sha256(readFileSync(join(dataDir, 'detent.sqlite')))).toBe(before)
    expect(readdirSync(dataDir)).toEqual(['detent.sqlite'])
  })

  it('replaces a database that is broken, and keeps it with its log', async () => {
    const w = await aKeptWalker()
    const { name } = await w.backUp()
    const dataDir = aFolder()
    writeFileSync(join(dataDir, 'detent.sqlite'), 'broken')
    writeFileSync(join(dataDir, 'detent.sqlite-wal'), 'broken log')
    expect(await restoreBackup({ dataDir }, join(w.backupDir, name), now)).toMatchObject({ replaced: null })
    for (const [file, text] of [['detent.sqlite', 'broken'], ['detent.sqlite-wal', 'broken log']]) expect(readFileSync(join(dataDir, 'replaced-2026-04-01T12-00-00Z', file), 'utf8')).toBe(text)
    expect(existsSync(join(dataDir, 'detent.sqlite-wal'))).toBe(false)
    const orm = await openDatabase(join(dataDir, 'detent.sqlite'))
    expect(await verifyLedger(orm.em.fork())).toMatchObject({ holds: true })
    await orm.close(true)
  })

  it('into an empty folder takes the private key along when the backup has it', async () => {
    const w = await aKeptWalker()
    const key = join(w.dataDir, 'a.key')
    writeFileSync(key, w.services.keys.current.export({ type: 'pkcs8', format: 'pem' }))
    const { name } = await makeBackup({ orm: w.orm, files: w.services.files.directory, folder: w.backupDir }, { now: w.services.now(), occasion: 'command', privateKey: key })
    const dataDir = join(aFolder(), 'new')
    expect(await restoreBackup({ dataDir }, join(w.backupDir, name), now)).toMatchObject({ keptAside: null, replaced: null, privateKeyTaken: true })
    expect(readdirSync(dataDir).sort()).toEqual(['detent.sqlite', 'files', 'workplace.key'])
    expect(readFileSync(join(dataDir, 'workplace.key'))).toEqual(readFileSync(key))
  })
})
