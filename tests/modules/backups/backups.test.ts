import { createHash } from 'node:crypto'
import { existsSync, mkdirSync, readFileSync, readdirSync, statSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { Readable } from 'node:stream'
import { pino } from 'pino'
import { describe, expect, it } from 'vitest'
import { readConfig } from '../../../server/config.ts'
import { placeIn } from '../../../server/db/file-store.ts'
import { DailyBackup, lastDue, makeDailyBackup } from '../../../server/modules/backups/daily-backup.ts'
import { LedgerCheckpoint } from '../../../server/modules/ledger/ledger-checkpoint.entity.ts'
import { LedgerEntry } from '../../../server/modules/ledger/ledger-entry.entity.ts'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aKeptWalker } from './a-kept-workplace.ts'

const sha256 = (bytes: Uint8Array | string) => createHash('sha256').update(bytes).digest('hex')
const log = pino({ level: 'silent' })

describe('a backup', () => {
  it('holds database, stored files, public keys and checkpoints; not the private key', async () => {
    const w = await aKeptWalker()
    const head = await w.head()
    const { name, record } = await w.backUp()
    const folder = join(w.backupDir, name)
    expect(readdirSync(w.backupDir)).toEqual([name])
    expect(readdirSync(folder).sort()).toEqual(['backup.json', 'checkpoints.jsonl', 'detent.sqlite', 'files', 'public-keys.pem'])
    expect(JSON.parse(readFileSync(join(folder, 'backup.json'), 'utf8'))).toEqual(record)
    expect(record).toMatchObject({ occasion: 'asked', ledger: head, trouble: [], orphans: [], privateKey: false, files: { sha256: [w.imageSha256], bytes: 23 } })
    expect(record.database.sha256).toBe(sha256(readFileSync(join(folder, 'detent.sqlite'))))
    expect(statSync(join(folder, 'detent.sqlite')).mode & 0o077).toBe(0)
    expect(readFileSync(placeIn(join(folder, 'files'), w.imageSha256), 'utf8')).toBe('firmware of hinge 2.1.0')
    expect(readFileSync(join(folder, 'public-keys.pem'), 'utf8')).toMatch(/^-----BEGIN PUBLIC KEY-----/)
    expect(readFileSync(join(folder, 'checkpoints.jsonl'), 'utf8')).toBe((await w.observer.get('/api/ledger/checkpoints.jsonl')).text)
    expect(readFileSync(join(folder, 'checkpoints.jsonl'), 'utf8').trim().split('\n')).toHaveLength(1)
    for (const file of readdirSync(folder)) if (file !== 'files') expect(readFileSync(join(folder, file), 'latin1')).not.toContain('PRIVATE KEY')
  })

  it('names stored files that are missing or altered, and those that nothing names', async () => {
    const w = await aKeptWalker({ released: false })
    const orphan = await w.services.files.receive(Readable.from([Buffer.from('named by nothing')]), 1000)
    await w.services.files.keep(orphan)
    writeFileSync(placeIn(w.services.files.directory, w.imageSha256), 'altered')
    expect((await w.backUp()).record).toMatchObject({ trouble: [{ sha256: w.imageSha256, what: 'altered' }], orphans: [orphan.sha256], files: { sha256: [orphan.sha256] } })
  })

  it('is made one at a time, and leaves nothing half made', async () => {
    const w = await aKeptWalker({ released: false })
    mkdirSync(join(w.backupDir, 'aside', 'left'), { recursive: true })
    const [first, second] = await Promise.allSettled([w.backUp(), w.backUp()])
    expect(first.status).toBe('fulfilled')
    expect(second).toMatchObject({ status: 'rejected', reason: { code: 'wrong-state' } })
    expect(readdirSync(w.backupDir)).toHaveLength(1)
    expect((await w.backUp()).name).toBe('2026-03-02T09-00-00Z-2')
    writeFileSync(join(w.dataDir, 'no-folder'), '')
    w.services.config.backupDir = join(w.dataDir, 'no-folder')
    await expect(makeDailyBackup(w.services)).rejects.toThrow('no-folder')
  })
})

describe('an administrator', () => {
  it('makes a backup, which the ledger tells; a repeat of the same request makes none', async () => {
    const w = await aKeptWalker({ released: false })
    const administrator = await w.as('administrator')
    const ask = () => administrator.post('/api/backups').set('Idempotency-Key', 'once-and-only')
    const { body } = await ask().expect(201)
    expect(body).toMatchObject({ backups: [{ name: '2026-03-02T09-00-00Z', occasion: 'asked', files: 1, orphans: 0, privateKey: false }], unreadable: 0, kept: 3, hour: 2, failed: null, may: { make: { allowed: true } } })
    expect(await lastEntries(w)).toMatchObject([{ act: 'backup made', personName: administrator.me.name, details: { name: '2026-03-02T09-00-00Z', occasion: 'asked', sha256: body.backups[0].sha256, takenAway: [] } }])
    const before = await w.head()
    await ask().expect(201)
    expect(await w.head()).toEqual(before)
    expect(readdirSync(w.backupDir)).toEqual(['2026-03-02T09-00-00Z'])
    expect((await administrator.get('/api/backups')).body).toEqual(body)
  })

  it('is the only one who does', async () => {
    const w = await aKeptWalker({ released: false })
    for (const person of [w.engineer, w.reviewer, w.manager, w.builder, w.observer]) {
      await person.get('/api/backups').expect(403)
      await person.post('/api/backups').expect(403)
    }
    expect(existsSync(w.backupDir)).toBe(false)
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'make a backup' } }])
  })

  it('keeps as many as the policy says, by their ledger, not their clock', async () => {
    const w = await aKeptWalker({ released: false })
    for (const time of ['2026-03-02', '2026-03-03', '2019-01-01', '2026-03-04']) {
      w.at(`${time}T09:00:00Z`)
      await makeDailyBackup(w.services)
    }
    expect(readdirSync(w.backupDir).sort()).toEqual(['2019-01-01T09-00-00Z', '2026-03-03T09-00-00Z', '2026-03-04T09-00-00Z'])
    const administrator = await w.as('administrator')
    expect((await administrator.get('/api/backups')).body.backups.map((b: { name: string }) => b.name)).toEqual(['2026-03-04T09-00-00Z', '2019-01-01T09-00-00Z', '2026-03-03T09-00-00Z'])
    expect(await lastEntries(w)).toMatchObject([{ details: { takenAway: ['2026-03-02T09-00-00Z'] } }])
  })
})

describe('the daily backup', () => {
  it('is due at its hour, also after a day that the program was off', () => {
    expect(lastDue(new Date(2026, 2, 2, 1, 59), 2)).toEqual(new Date(2026, 2, 1, 2))
    expect(lastDue(new Date(2026, 2, 2, 2, 0), 2)).toEqual(new Date(2026, 2, 2, 2))
    expect(lastDue(new Date(2026, 2, 2, 23, 0), 2)).toEqual(new Date(2026, 2, 2, 2))
  })

  it('is made once a day, with a checkpoint before it', async () => {
    const w = await aKeptWalker()
    const daily = new DailyBackup(w.services, log)
    const made = () => (existsSync(w.backupDir) ? readdirSync(w.backupDir).length : 0)
    const look = async (hours: number) => {
      w.at(new Date(new Date(2026, 2, 3, 0).getTime() + hours * 3_600_000))
      await daily.look()
      return made()
    }
    expect(await look(1)).toBe(0)
    expect(await look(2)).toBe(1)
    expect(await lastEntries(w)).toMatchObject([{ act: 'backup made', personName: 'Detent', details: { occasion: 'daily' } }])
    const newest = async () => (await w.orm.em.fork().find(LedgerCheckpoint, {}, { orderBy: { id: 'desc' }, limit: 1 }))[0]
    expect(await newest()).toMatchObject({ occasion: 'release' })
    expect(await look(2.5)).toBe(1)
    expect(await look(25)).toBe(1)
    expect(await look(26)).toBe(2)
    expect(await newest()).toMatchObject({ occasion: 'daily', sequence: (await w.head()).entries - 1 })
    expect(await look(26 + 24 * 7)).toBe(3)
    w.services.config.backupHour = null
    expect(await look(26 + 24 * 9)).toBe(3)
  })

  it('that fails is told to the ledger and the administrators once, tried again each hour, and made when it can be', async () => {
    const w = await aKeptWalker()
    const administrator = await w.as('administrator')
    const good = w.services.config.backupDir
    writeFileSync(join(w.dataDir, 'no-folder'), '')
    w.services.config.backupDir = join(w.dataDir, 'no-folder')
    const daily = new DailyBackup(w.services, log)
    const mails = () => w.orm.em.fork().find(Mail, { subject: 'No backup was made' })
    for (const minutes of [0, 10, 70]) {
      w.at(new Date(new Date(2026, 2, 3, 2).getTime() + minutes * 60_000))
      await daily.look()
    }
    const failures = await w.orm.em.fork().find(LedgerEntry, { act: 'backup failed' })
    expect(failures).toMatchObject([{ details: { why: expect.stringContaining('no-folder') } }])
    expect(await mails()).toMatchObject([{ to: administrator.me.email, text: expect.stringContaining('The backups made before are kept') }])
    const again = await w.signIn(await w.person('Deputy', [['administrator', null]]))
    expect((await again.get('/api/backups')).body.failed).toMatchObject({ at: new Date(2026, 2, 3, 2).toISOString(), why: expect.stringContaining('no-folder') })
    w.services.config.backupDir = good
    w.at(new Date(2026, 2, 3, 3, 20))
    await daily.look()
    expect(existsSync(good)).toBe(false)
    w.at(new Date(2026, 2, 3, 4, 20))
    await daily.look()
    expect(readdirSync(good)).toHaveLength(1)
    expect((await again.get('/api/backups')).body.failed).toBeNull()
  })
})

describe('the settings', () => {
  it.each([
    [{ DETENT_BACKUP_HOUR: '24' }, 'DETENT_BACKUP_HOUR is "24"; it takes a whole number from 0 to 23.'],
    [{ DETENT_BACKUP_HOUR: 'noon' }, 'DETENT_BACKUP_HOUR is "noon"'],
    [{ DETENT_BACKUPS_KEPT: '0' }, 'DETENT_BACKUPS_KEPT is "0"; it takes a whole number from 1 to 1000.'],
  ])('%o are refused', (env, message) => expect(() => readConfig(env)).toThrow(message))

  it('have defaults', () => {
    expect(readConfig({ DETENT_DATA: '/srv/detent' })).toMatchObject({ backupDir: '/srv/detent/backups', backupHour: 2, backupsKept: 14 })
    expect(readConfig({ DETENT_BACKUPS: '/backups', DETENT_BACKUP_HOUR: 'off' })).toMatchObject({ backupDir: '/backups', backupHour: null })
  })
})
