import { readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { expect, it } from 'vitest'
import { placeIn } from '../../server/db/file-store.ts'
import { openDatabase } from '../../server/db/orm.ts'
import { inBackup } from '../../server/modules/backups/backup-record.ts'
import { ReleaseJoint } from '../../server/modules/releases/release-joint.entity.ts'
import { lastEntries } from '../support/ledger.ts'
import { aKeptWalker } from '../modules/backups/a-kept-workplace.ts'
import { takeFile } from '../../server/modules/releases/take-file.ts'
import { takeKit } from '../../server/modules/releases/take-kit.ts'
import { Release } from '../../server/modules/releases/release.entity.ts'

const current = { state: 'current', mark: '', reason: null } as const

/** Flips one bit of a file where these bytes stand in it, as a failing disk would; the program is not running. */
function flipIn(file: string, bytes: Uint8Array, at: number) {
  const all = readFileSync(file)
  const where = all.indexOf(bytes)
  expect(where).toBeGreaterThan(0)
  expect(all.indexOf(bytes, where + 1)).toBe(-1)
  all[where + at] ^= 0x10
  writeFileSync(file, all)
}

it('one flipped bit of an image in the database file: refused and named, and nothing else is', async () => {
  const w = await aKeptWalker()
  const { name } = await w.backUp()
  const file = join(w.backupDir, name, inBackup.database)
  const [row] = await w.orm.em.fork().find(ReleaseJoint, {}, { populate: ['joint', 'image'], orderBy: { id: 'asc' } })
  // wherever the bit is: in the first byte, in the middle, in the last one
  flipIn(file, Buffer.from(row.image), Math.floor(row.image.length / 2))
  const orm = await openDatabase(file)
  try {
    expect(await orm.em.getConnection().execute('pragma integrity_check')).toEqual([{ integrity_check: 'ok' }])
    const em = orm.em.fork()
    const release = await em.findOneOrFail(Release, { version: '1.0.0' }, { populate: ['machine'] })
    const others = Object.keys(release.set.joints).filter((key) => key !== row.joint.key)
    await expect(takeFile(em, { release, joint: row.joint.key, format: 'bin', taking: current })).rejects.toMatchObject({ code: 'verification-failed', recorded: true, message: expect.stringContaining(`The image of ${row.joint.key} of Dunlin 1.0.0 is not what was signed: the stored bytes do not match the SHA-256 that was signed.`) })
    await expect(takeKit(em, w.services.files, release, current)).rejects.toMatchObject({ code: 'verification-failed', message: expect.stringContaining(row.joint.key) })
    expect((await takeFile(em, { release, joint: others[0], format: 'bin', taking: current })).bytes.length).toBeGreaterThan(0)
  } finally {
    await orm.close(true)
  }
})

it('one flipped bit while it runs: the download answers so, and the ledger names it', async () => {
  const w = await aKeptWalker()
  const run = (sql: string) => w.orm.em.getConnection().execute(sql)
  await run('drop trigger release_joint_no_update')
  const [{ image }] = (await run('select image from release_joint where id = 1')) as { image: Buffer }[]
  const bad = Buffer.from(image)
  bad[bad.length - 1] ^= 1
  await run(`update release_joint set image = x'${bad.toString('hex')}' where id = 1`)
  const { body } = await w.builder.get('/api/machines/dunlin/releases/1.0.0/joints/l1-knee/image.bin').expect(500)
  expect(body).toMatchObject({ type: '/problems/verification-failed', detail: expect.stringContaining('The image of l1-knee of Dunlin 1.0.0 is not what was signed') })
  expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { refusal: 'verification-failed', why: expect.stringContaining('l1-knee') } }])
  await w.builder.get('/api/machines/dunlin/releases/1.0.0/joints/r1-knee/image.bin').expect(200)
})

it('one flipped bit of a stored file: refused and named, in downloads and kits', async () => {
  const w = await aKeptWalker()
  const file = placeIn(w.services.files.directory, w.imageSha256)
  const bytes = readFileSync(file)
  bytes[3] ^= 0x20
  writeFileSync(file, bytes)
  for (const path of ['/api/firmware/hinge/2.1.0/image', '/api/machines/dunlin/releases/1.0.0/kit.zip']) {
    const { body } = await w.builder.get(path).expect(500)
    expect(body).toMatchObject({ type: '/problems/verification-failed', detail: expect.stringContaining(`SHA-256 ${w.imageSha256}`) })
    expect(body.detail).toContain('hinge 2.1.0')
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { refusal: 'verification-failed' } }])
  }
})
