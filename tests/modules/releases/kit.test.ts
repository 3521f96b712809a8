import { mkdirSync } from 'node:fs'
import { dirname } from 'node:path'
import { unzipSync } from 'fflate'
import { beforeAll, describe, expect, it } from 'vitest'
import { StoredFileProblem } from '../../../server/db/file-store.ts'
import { EXPORT_FORMATS } from '../../../server/exports/export-file.ts'
import { verifyKit } from '../../../server/exports/verify-kit.ts'
import type { WorkplaceKeysView } from '../../../shared/contract/keys.ts'
import type { ReleaseView } from '../../../shared/contract/releases.ts'
import { inDirectory, run, write } from '../../exports/outside-tools.ts'
import { aFirmwareImage } from '../../support/a-firmware-image.ts'
import { aDraft, aWalker, readAll, reviewed, submitted, through, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { password } from '../../support/workplace.ts'
import { asBytes, nameOf, shaOf } from './downloads.ts'

const at = '/api/machines/dunlin/releases/1.0.0'
const keysOf = async (w: Walker) => ((await w.observer.get('/api/keys').expect(200)).body as WorkplaceKeysView).keys

/** A release of two knees, with the firmware's own image. */
async function aReleased(): Promise<Walker & { image: string }> {
  const w = await aWalker()
  const image = await aFirmwareImage(w)
  await through(w, await aDraft(w))
  return { ...w, image }
}

describe('the kit of a release', () => {
  let w: Walker & { image: string }
  let zip: Buffer
  beforeAll(async () => {
    w = await aReleased()
    zip = (await asBytes(w.builder.get(`${at}/kit.zip`)).expect(200)).body as Buffer
  })

  it('is the same bytes every time, under a name that says what it is; each download is in the ledger', async () => {
    const again = await asBytes(w.manager.get(`${at}/kit.zip`)).expect(200)
    expect((again.body as Buffer).equals(zip)).toBe(true)
    expect(again.headers).toMatchObject({ 'x-detent-sha256': shaOf(zip), 'content-type': 'application/zip' })
    expect(nameOf(again.headers)).toBe('dunlin_1.0.0_kit.zip')
    expect(await lastEntries(w, 2)).toEqual([w.manager, w.builder].map((who) => ({ act: 'kit downloaded', subject: { machine: 'dunlin', release: '1.0.0' }, details: { sha256: shaOf(zip), state: 'current' }, personName: who.me.name })))
  })

  it('holds every form of every joint, the firmware image, and nothing that its manifest does not name', () => {
    const files = Object.keys(unzipSync(zip))
    const forms = ['.bin', '.csv', '.h', '.hex', '.json', '.rdl', '.srec', '.write-list.csv']
    expect(files.sort()).toEqual(
      ['README.txt', 'SHA256SUMS', 'SHA256SUMS.sig', 'firmware/hinge-2.1.0.bin', 'manifest.dsse.json', 'manifest.json', 'manifest.sig', 'public-key.pem', ...['l1-knee', 'r1-knee'].flatMap((j) => forms.map((e) => `joints/${j}/dunlin_${j}_1.0.0${e}`))].sort(),
    )
    expect(shaOf(unzipSync(zip)['firmware/hinge-2.1.0.bin'])).toBe(w.image)
  })

  it('is verified offline with the public key that the workplace shows', async () => {
    const [key] = await keysOf(w)
    expect(verifyKit(zip, key.publicKey)).toEqual({ kind: 'verified', keyId: key.keyId, keyTrusted: true, release: { machine: 'Dunlin', version: '1.0.0', sequence: 1, files: 18 } })
    expect(key.releases).toBe(1)
  })

  it('is proven by openssl and sha256sum alone, as its README says', async () => {
    const [key] = await keysOf(w)
    inDirectory((path) => {
      for (const [name, bytes] of Object.entries(unzipSync(zip))) {
        mkdirSync(dirname(path(name)), { recursive: true })
        write(path(name), bytes)
      }
      const commands = Buffer.from(unzipSync(zip)['README.txt']).toString().split('\n').map((line) => line.trim()).filter((line) => /^(openssl|sha256sum) /.test(line))
      const said = commands.map((command) => run('sh', ['-c', `cd '${path('.')}' && ${command}`]).toString())
      expect(said[0]).toContain(key.keyId)
      expect(said[1]).toContain('Signature Verified Successfully')
      expect(said[2]).toContain('Signature Verified Successfully')
      expect(said[3].trim().split('\n').every((line) => line.endsWith(': OK'))).toBe(true)
      expect(said[3].trim().split('\n')).toHaveLength(Object.keys(unzipSync(zip)).length - 2)
    })
  })

  it('says who signed what and when, the verdicts, the revisions and the tool, as the release shows them', async () => {
    const release = (await w.observer.get(at).expect(200)).body as ReleaseView
    const manifest = Buffer.from(unzipSync(zip)['manifest.json']).toString()
    expect(release.kit).toEqual({ manifestSha256: shaOf(manifest), keyId: (await keysOf(w))[0].keyId, bytes: zip.length })
    expect(release.firmwareImages).toEqual(['hinge 2.1.0'])
    const { predicate } = JSON.parse(manifest) as { predicate: Record<string, unknown> }
    expect(predicate).toMatchObject({
      exporter: 1,
      release: { machine: 'Dunlin', version: '1.0.0', sequence: 1, contentHash: release.contentHash, releasedAt: release.releasedAt, reason: release.reason },
      signatures: release.signatures.map((s) => ({ person: s.person, meaning: s.meaning, signedAt: s.at, contentHash: s.contentHash })),
      verdicts: [{ joint: 'l1-knee', verdict: 'stable' }, { joint: 'r1-knee', verdict: 'stable' }],
      joints: release.items.map((i) => ({ joint: i.joint, address: i.address, revision: i.revision, imageSha256: i.imageSha256, firmware: { line: 'hinge', version: '2.1.0', imageSha256: w.image } })),
    })
  })

  it('holds the very files that are handed out one by one', async () => {
    const files = unzipSync(zip)
    for (const format of EXPORT_FORMATS) {
      const single = await asBytes(w.builder.get(`${at}/joints/l1-knee/image.${format}`)).expect(200)
      const path = `joints/l1-knee/${nameOf(single.headers)}`
      expect(shaOf(single.body as Buffer), path).toBe(shaOf(files[path]))
      expect(single.headers['x-detent-sha256']).toBe(shaOf(files[path]))
    }
    expect(await lastEntries(w)).toMatchObject([{ act: 'release file downloaded', subject: { machine: 'dunlin', release: '1.0.0', joint: 'l1-knee' }, details: { format: 'systemrdl', state: 'current' } }])
  })

  it('is refused to an observer, and the ledger says so', async () => {
    await w.observer.get(`${at}/kit.zip`).expect(403)
    await w.reviewer.get(`${at}/kit.zip`).expect(403)
  })

  it('stays as it was signed when the key is rotated; the next release is signed with the new one', async () => {
    const [before] = await keysOf(w)
    const administrator = await w.as('administrator')
    await administrator.post('/api/keys/rotate', { password, keyId: before.keyId }).expect(200)
    const again = await asBytes(w.builder.get(`${at}/kit.zip`)).expect(200)
    expect((again.body as Buffer).equals(zip)).toBe(true)
    expect(verifyKit(again.body as Buffer, before.publicKey)).toMatchObject({ kind: 'verified', keyTrusted: true })

    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Softer knees', reason: 'The gear train hums.' }).expect(201)).body as { key: string }
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/velocityGain', from: 3.2, to: 3.1 }] }).expect(200)
    await through(w, key, '1.0.1')
    const [now] = await keysOf(w)
    const next = (await asBytes(w.builder.get('/api/machines/dunlin/releases/1.0.1/kit.zip')).expect(200)).body as Buffer
    expect(now.keyId).not.toBe(before.keyId)
    expect(verifyKit(next, now.publicKey)).toMatchObject({ kind: 'verified', release: { version: '1.0.1', sequence: 2 } })
    expect(verifyKit(next, before.publicKey)).toMatchObject({ kind: 'refused' })
  })

  it('of a superseded release wants a reason, which the ledger keeps, and bears the mark', async () => {
    const refused = await w.builder.get(`${at}/kit.zip`).expect(400)
    expect(refused.body).toMatchObject({ type: '/problems/invalid-request', errors: [{ pointer: '/reason' }], detail: expect.stringContaining('superseded') })
    await w.builder.get(`${at}/kit.zip?reason=%20%20`).expect(400)
    await w.builder.get(`${at}/joints/l1-knee/image.bin`).expect(400)
    const taken = await asBytes(w.builder.get(`${at}/kit.zip?reason=${encodeURIComponent('To look at what H-0258 held in November')}`)).expect(200)
    expect((taken.body as Buffer).equals(zip)).toBe(true)
    expect(nameOf(taken.headers)).toBe('SUPERSEDED_dunlin_1.0.0_kit.zip')
    expect(await lastEntries(w)).toMatchObject([{ act: 'kit downloaded', details: { state: 'superseded', reason: 'To look at what H-0258 held in November' } }])
    expect((await w.observer.get(at)).body).toMatchObject({ needsReason: true })
  })

  it('of a withdrawn release is a release manager’s alone, marked', async () => {
    await w.manager.post(`${at}/withdraw`, { version: '1.0.0', reason: 'The hip oscillates.' }).expect(200)
    await w.builder.get(`${at}/kit.zip?reason=please`).expect(403)
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'download the kit of a release', refusal: 'not-permitted' } }])
    const taken = await asBytes(w.manager.get(`${at}/kit.zip`)).expect(200)
    expect(nameOf(taken.headers)).toBe('WITHDRAWN_dunlin_1.0.0_kit.zip')
  })
})

describe('a release', () => {
  it('is not made when a firmware image is missing or altered: nothing is written, and the ledger tells', async () => {
    const w = await aWalker()
    const image = await aFirmwareImage(w)
    const key = await aDraft(w)
    await submitted(w, key)
    const view = await reviewed(w, key)
    await w.orm.em.getConnection().execute(`update firmware_version set image_sha256 = '${'0'.repeat(64)}'`)
    await readAll(w.manager, key)
    const refused = await w.manager.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version: '1.0.0' }).set('If-Match', `"${view.revision}"`).expect(500)
    expect(refused.body).toMatchObject({ type: '/problems/verification-failed', detail: expect.stringContaining('hinge 2.1.0') })
    expect(refused.body.detail).toContain('missing')
    expect(image).toHaveLength(64)
    await w.observer.get(at).expect(404)
    expect((await w.observer.get(`/api/changes/${key}`)).body).toMatchObject({ state: 'approved' })
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'sign and release a change', refusal: 'verification-failed' } }])
  })
})

describe('a kit whose stored parts were meddled with', () => {
  let w: Walker & { image: string }
  beforeAll(async () => {
    w = await aReleased()
    for (const table of ['release', 'release_joint', 'release_kit', 'revision', 'workplace_key']) await w.orm.em.getConnection().execute(`drop trigger \`${table}_no_update\``)
  })

  /** What alters the store, and what puts it back. */
  const meddled: [string, string, string, RegExp][] = [
    ['a byte of an image', "update release_joint set image = cast(x'00' || substr(image, 2) as blob), image_sha256 = image_sha256 where id = (select min(id) from release_joint)", 'release_joint', /image of l1-knee .* stored bytes/],
    ["an image's hash", `update release_joint set image_sha256 = '${'0'.repeat(64)}'`, 'release_joint', /image of l1-knee/],
    ['a stored value', "update revision set content = replace(content, '3.2', '3.4')", 'revision', /image of l1-knee .* encode to other bytes/],
    ["a joint's address", "update revision set content = replace(content, '\"address\":51', '\"address\":52')", 'revision', /not what was signed/],
    ['the manifest', "update release_kit set manifest = replace(manifest, '1.0.0', '1.0.9')", 'release_kit', /The manifest .* SHA-256/],
    ["the manifest's signature", "update release_kit set signature = cast(case substr(signature, 1, 1) when x'00' then x'01' else x'00' end || substr(signature, 2) as blob)", 'release_kit', /The manifest .* signature does not hold/],
    ['the envelope', "update release_kit set envelope = replace(envelope, 'payload', 'pay1oad')", 'release_kit', /The kit .* envelope/],
    ["the list's signature", "update release_kit set sums_signature = cast(case substr(sums_signature, 1, 1) when x'00' then x'01' else x'00' end || substr(sums_signature, 2) as blob)", 'release_kit', /The kit .* SHA256SUMS/],
    ['the key it names', `update release_kit set key_id = '${'a'.repeat(64)}'`, 'release_kit', /none of the workplace/],
    ['the content that was signed', "update `release` set content = replace(content, 'knee', 'hip')", 'release', /The content .* signatures bind to/],
  ]
  it.each(meddled)('%s: refused, named and recorded', async (_what, sql, table, told) => {
    const connection = w.orm.em.getConnection()
    await connection.execute(`create table kept as select * from \`${table}\``)
    await connection.execute(sql)
    const refused = await w.builder.get(`${at}/kit.zip`)
    expect(refused.status).toBe(500)
    expect(refused.body).toMatchObject({ type: '/problems/verification-failed' })
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'download the kit of a release', refusal: 'verification-failed' } }])
    expect(refused.body.detail).toMatch(told)
    const columns = ((await connection.execute(`pragma table_info(\`${table}\`)`)) as { name: string }[]).map((c) => c.name)
    await connection.execute(`update \`${table}\` set ${columns.filter((c) => c !== 'id').map((c) => `\`${c}\` = (select \`${c}\` from kept where kept.id = \`${table}\`.id)`).join(', ')}`)
    await connection.execute('drop table kept')
    await asBytes(w.builder.get(`${at}/kit.zip`)).expect(200)
  })

  it('the firmware image: refused, named and recorded', async () => {
    const read = w.services.files.read
    w.services.files.read = async (sha256) => {
      throw new StoredFileProblem(sha256, 'altered')
    }
    try {
      const refused = await w.builder.get(`${at}/kit.zip`).expect(500)
      expect(refused.body.detail).toMatch(/firmware image of hinge 2\.1\.0 .* altered/)
      await asBytes(w.builder.get(`${at}/joints/l1-knee/image.bin`)).expect(200)
    } finally {
      w.services.files.read = read
    }
  })
})
