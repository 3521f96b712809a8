import { createHash } from 'node:crypto'
import { beforeAll, describe, expect, it } from 'vitest'
import type supertest from 'supertest'
import { FirmwareVersion } from '../../../server/modules/firmware/firmware-version.entity.ts'
import { sniffFirmware } from '../../../server/modules/firmware/sniff-firmware.ts'
import type { FirmwareVersionView } from '../../../shared/contract/firmware.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aWorkplace, password, type SignedIn, type Workplace } from '../../support/workplace.ts'
import { asBytes, nameOf } from '../releases/downloads.ts'

const path = '/api/firmware/hinge/2.1.0'
const shaOf = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex')
const raw = Buffer.from(Array.from({ length: 5000 }, (_, k) => (k * 31) & 255))
// two data records and the end record, checksums by hand: Intel, Hexadecimal Object File Format Specification, Rev. A (1988)
const hexText = ':0400000001020304F2\r\n:02000400AABB95\r\n:00000001FF\r\n'

const upload = (person: SignedIn, bytes: Buffer, name: string, revision = 1): supertest.Test => person.upload(`${path}/image`, 'image', bytes, name).set('If-Match', `"${revision}"`)

describe('what a firmware image is', () => {
  it.each<[string, Buffer, string, object]>([
    ['raw bytes', raw, 'hinge.bin', { kind: 'firmware', format: 'bin' }],
    ['raw bytes without an ending', raw, 'hinge', { kind: 'firmware', format: 'bin' }],
    ['Intel HEX', Buffer.from(hexText), 'hinge.hex', { kind: 'firmware', format: 'hex' }],
    ['Intel HEX without an ending', Buffer.from(hexText), 'firmware', { kind: 'firmware', format: 'hex' }],
    ['Intel HEX whose lines do not rise', Buffer.from(':02000400AABB95\n:0400000001020304F2\n:00000001FF\n'), 'hinge.hex', { kind: 'firmware', format: 'hex' }],
    ['a wrong checksum', Buffer.from(hexText.replace('F2', 'F3')), 'hinge.hex', { kind: 'refused', line: 1, message: expect.stringContaining('checksum') }],
    ['a wrong length', Buffer.from(hexText.replace(':02', ':03')), 'hinge.hex', { kind: 'refused', line: 2 }],
    ['a file cut off', Buffer.from(hexText.split('\r\n').slice(0, 2).join('\r\n')), 'hinge.hex', { kind: 'refused', message: expect.stringContaining('no end record') }],
    ['more after the end', Buffer.from(`${hexText}:00000001FF\r\n`), 'hinge.hex', { kind: 'refused', line: 4 }],
    ['HEX called raw', Buffer.from(hexText), 'hinge.bin', { kind: 'refused', message: expect.stringContaining('are Intel HEX') }],
    ['raw bytes called HEX', raw, 'hinge.hex', { kind: 'refused', message: expect.stringContaining('no Intel HEX') }],
    ['a zip', Buffer.from('504b0304aabb', 'hex'), 'hinge.bin', { kind: 'refused', message: expect.stringContaining('a zip archive') }],
    ['an ELF program', Buffer.from('7f454c460201', 'hex'), 'hinge.bin', { kind: 'refused', message: expect.stringContaining('an ELF program') }],
    ['an S-record', Buffer.from('S00600004844521B\nS9030000FC\n'), 'hinge.bin', { kind: 'refused', message: expect.stringContaining('S-record') }],
  ])('%s', (_what, bytes, name, told) => {
    expect(sniffFirmware(bytes, name)).toMatchObject(told)
  })
})

describe('the firmware image of a draft', () => {
  let w: Workplace
  let engineer: SignedIn
  beforeAll(async () => {
    w = await aWorkplace()
    await aFirmware(w, { state: 'draft' })
    engineer = await w.as('controls engineer')
  })

  it('is attached: hashed, sniffed, kept, told in the ledger; whoever did it is a writer', async () => {
    const { body } = await upload(engineer, raw, 'hinge-2.1.0.bin').expect(200)
    const view = body as FirmwareVersionView
    expect(view).toMatchObject({ revision: 2, firmwareImage: { sha256: shaOf(raw), bytes: 5000, format: 'bin', name: 'hinge-2.1.0.bin' } })
    expect(view.writers).toContain(engineer.me.name)
    expect(await lastEntries(w)).toEqual([{ act: 'firmware image attached', subject: { firmware: 'hinge 2.1.0' }, personName: engineer.me.name, details: view.firmwareImage }])
    expect((await w.services.files.read(shaOf(raw))).equals(raw)).toBe(true)
  })

  it('is replaced by another, and the entry names both', async () => {
    const { body } = await upload(engineer, Buffer.from(hexText), 'hinge.hex', 2).expect(200)
    expect((body as FirmwareVersionView).firmwareImage).toMatchObject({ format: 'hex' })
    expect(await lastEntries(w)).toMatchObject([{ details: { sha256: shaOf(Buffer.from(hexText)), replaces: shaOf(raw) } }])
  })

  it('leaves no file behind: neither the one replaced, nor one that was refused', async () => {
    await expect(w.services.files.read(shaOf(raw))).rejects.toMatchObject({ what: 'missing' })
    const late = Buffer.from('came over another state')
    await upload(engineer, late, 'late.bin', 1).expect(412)
    await expect(w.services.files.read(shaOf(late))).rejects.toMatchObject({ what: 'missing' })
    expect((await w.services.files.read(shaOf(Buffer.from(hexText)))).toString()).toBe(hexText)
  })

  it('is downloaded by whoever downloads, byte for byte, marked as a draft; the ledger tells', async () => {
    for (const role of ['builder', 'release manager', 'controls engineer'] as const) {
      const taken = await asBytes((await w.as(role)).get(`${path}/image`)).expect(200)
      expect((taken.body as Buffer).toString()).toBe(hexText)
      expect(taken.headers['x-detent-sha256']).toBe(shaOf(Buffer.from(hexText)))
      expect(nameOf(taken.headers)).toBe('DRAFT_hinge-2.1.0.hex')
      expect(await lastEntries(w)).toMatchObject([{ act: 'firmware image downloaded', details: { sha256: shaOf(Buffer.from(hexText)), state: 'draft' } }])
    }
    for (const role of ['observer', 'peer reviewer', 'administrator'] as const) await (await w.as(role)).get(`${path}/image`).expect(403)
  })

  it('is refused with what is wrong and where; the draft stays as it was', async () => {
    const before = (await engineer.get(path)).body as FirmwareVersionView
    const refused = await upload(engineer, Buffer.from(hexText.replace('F2', 'F3')), 'hinge.hex', before.revision).expect(415)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-media-type', line: 1, errors: [{ pointer: '/image' }], detail: expect.stringMatching(/^Line 1 ends with the checksum F3.* Nothing was attached/) })
    expect((await engineer.get(path)).body).toEqual(before)
  })

  it('is refused past its limit, empty, twice, in another field, or as no form', async () => {
    const { revision } = (await engineer.get(path)).body as FirmwareVersionView
    const put = () => engineer.upload(`${path}/image`, 'image', Buffer.alloc(8 * 1024 * 1024 + 1, 1), 'large.bin').set('If-Match', `"${revision}"`)
    expect((await put().expect(413)).body).toMatchObject({ type: '/problems/body-too-large', detail: expect.stringContaining('8388608 bytes') })
    expect((await upload(engineer, Buffer.alloc(0), 'empty.bin', revision).expect(400)).body.detail).toContain('empty')
    expect((await engineer.upload(`${path}/image`, 'other', raw, 'x.bin').set('If-Match', `"${revision}"`).expect(400)).body.detail).toContain('another field')
    expect((await engineer.upload(`${path}/image`, 'image', raw, 'x.bin').attach('image', raw, 'y.bin').set('If-Match', `"${revision}"`).expect(400)).body.detail).toContain('more than one file')
    expect((await engineer.put(`${path}/image`, { image: 'x' }).set('If-Match', `"${revision}"`).expect(415)).body).toMatchObject({ type: '/problems/wrong-media-type' })
    await upload(engineer, Buffer.alloc(8 * 1024 * 1024, 1), 'just.bin', revision).expect(200)
  })

  it('is refused over another state of the draft, and to those who draft no firmware', async () => {
    await upload(engineer, raw, 'hinge.bin', 1).expect(412)
    await engineer.upload(`${path}/image`, 'image', raw, 'hinge.bin').expect(428)
    const manager = await w.as('release manager')
    await upload(manager, raw, 'hinge.bin', 1).expect(403)
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'attach a firmware image to a draft' } }])
  })

  it('is taken away again', async () => {
    const { revision } = (await engineer.get(path)).body as FirmwareVersionView
    const { body } = await engineer.delete(`${path}/image`).set('If-Match', `"${revision}"`).expect(200)
    expect((body as FirmwareVersionView).firmwareImage).toBeNull()
    expect(await lastEntries(w)).toMatchObject([{ act: 'firmware image taken away' }])
    await expect(w.services.files.read(shaOf(Buffer.alloc(8 * 1024 * 1024, 1)))).rejects.toMatchObject({ what: 'missing' })
    await engineer.delete(`${path}/image`).set('If-Match', `"${revision + 1}"`).expect(409)
    expect((await asBytes(engineer.get(`${path}/image`))).status).toBe(404)
  })
})

describe('a firmware image that two drafts have', () => {
  it('stays while either names it', async () => {
    const w = await aWorkplace()
    await aFirmware(w, { state: 'draft' })
    await aFirmware(w, { state: 'draft', version: '2.2.0' })
    const engineer = await w.as('controls engineer')
    const attach = (version: string, bytes: Buffer, revision: number) => engineer.upload(`/api/firmware/hinge/${version}/image`, 'image', bytes, 'a.bin').set('If-Match', `"${revision}"`).expect(200)
    await attach('2.1.0', raw, 1)
    await attach('2.2.0', raw, 1)
    await attach('2.1.0', Buffer.from('another'), 2)
    expect((await w.services.files.read(shaOf(raw))).equals(raw)).toBe(true)
    await engineer.delete('/api/firmware/hinge/2.2.0/image').set('If-Match', '"2"').expect(200)
    await expect(w.services.files.read(shaOf(raw))).rejects.toMatchObject({ what: 'missing' })
  })
})

describe('publishing a version with a firmware image', () => {
  let w: Workplace
  let engineer: SignedIn
  let manager: SignedIn
  let schemaHash: string
  beforeAll(async () => {
    w = await aWorkplace()
    ;({ schemaHash } = await aFirmware(w, { state: 'draft' }))
    engineer = await w.as('controls engineer')
    manager = await w.as('release manager')
    await upload(engineer, raw, 'hinge.bin').expect(200)
  })

  it('binds the signature to the image too', async () => {
    for (const imageHash of [null, 'a'.repeat(64)]) {
      const refused = await manager.post(`${path}/publish`, { password, schemaHash, imageHash }).expect(409)
      expect(refused.body).toMatchObject({ type: '/problems/content-differs', errors: [{ pointer: '/imageHash' }] })
    }
    await manager.post(`${path}/publish`, { password, schemaHash }).expect(400)
  })

  it('is refused while the stored file is missing or altered, and names it', async () => {
    const em = w.orm.em.fork()
    const row = await em.findOneOrFail(FirmwareVersion, { version: '2.1.0' })
    row.imageSha256 = 'b'.repeat(64)
    await em.flush()
    const refused = await manager.post(`${path}/publish`, { password, schemaHash, imageHash: 'b'.repeat(64) }).expect(500)
    expect(refused.body).toMatchObject({ type: '/problems/verification-failed', detail: expect.stringMatching(/hinge 2\.1\.0 \(hinge\.bin, SHA-256 b{64}\) is missing/) })
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { refusal: 'verification-failed' } }])
    expect((await engineer.get(`${path}/image`)).status).toBe(500)
    row.imageSha256 = shaOf(raw)
    await em.flush()
  })

  it('is done over both hashes, which the ledger keeps; the image is fixed from then on', async () => {
    await manager.post(`${path}/publish`, { password, schemaHash, imageHash: shaOf(raw) }).expect(200)
    expect(await lastEntries(w)).toMatchObject([{ act: 'firmware published', details: { schemaHash, imageHash: shaOf(raw) } }])
    const { revision } = (await engineer.get(path)).body as FirmwareVersionView
    expect((await upload(engineer, Buffer.from(hexText), 'hinge.hex', revision).expect(409)).body).toMatchObject({ type: '/problems/wrong-state' })
    await engineer.delete(`${path}/image`).set('If-Match', `"${revision}"`).expect(409)
    const taken = await asBytes(manager.get(`${path}/image`)).expect(200)
    expect(nameOf(taken.headers)).toBe('hinge-2.1.0.bin')
  })
})
