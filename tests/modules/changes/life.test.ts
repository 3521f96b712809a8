import { createHash } from 'node:crypto'
import { beforeAll, describe, expect, it } from 'vitest'
import type { ReleaseView } from '../../../shared/contract/releases.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aDraft, aWalker, etag, read, readAll, released, reviewed, submitted, type Walker } from '../../support/a-walker.ts'
import { password } from '../../support/workplace.ts'

describe('a change from draft to the bytes on a disk', () => {
  let w: Walker
  let key: string
  beforeAll(async () => {
    w = await aWalker()
    key = await aDraft(w)
  })

  it('is stopped while a gain makes a loop unstable, and stays a draft', async () => {
    const before = await read(w.engineer, key)
    const pointer = '/families/knee/values/velocityGain'
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer, from: 3.2, to: 8 }, { pointer: '/families/knee/values/velocityWindow', from: 14, to: 40 }] }).expect(200)
    const check = (await w.engineer.get(`/api/changes/${key}/check`).expect(200)).body
    expect(check.verdict).toBe('unstable')
    const refusal = await w.engineer.post(`/api/changes/${key}/submit`).set('If-Match', etag(await read(w.engineer, key))).expect(422)
    expect(refusal.body.type).toBe('/problems/check-blocks')
    expect(refusal.body.errors.some((e: { detail: string }) => e.detail.includes('unstable'))).toBe(true)
    expect((await read(w.engineer, key)).state).toBe('draft')
    await w.engineer.post(`/api/changes/${key}/back`, { point: 2 }).set('If-Match', etag(await read(w.engineer, key))).expect(200)
    expect((await read(w.engineer, key)).text).toBe(before.text)
  })

  it('freezes when submitted: nobody edits it, its author included', async () => {
    const view = await submitted(w, key)
    expect(view.state).toBe('submitted')
    expect(view.contentHash).toMatch(/^[0-9a-f]{64}$/)
    const refusal = await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/velocityGain', from: 3.2, to: 3 }] }).expect(409)
    expect(refusal.body.type).toBe('/problems/wrong-state')
    expect(view.may.edit).toEqual({ allowed: false, why: 'The change is submitted.' })
  })

  it("refuses its author's signature, whatever roles they hold, and records the attempt", async () => {
    const em = w.orm.em.fork()
    const { RoleGrant } = await import('../../../server/modules/people/role-grant.entity.ts')
    em.create(RoleGrant, { person: w.engineer.me.id, role: 'peer reviewer', machine: null, grantedAt: w.services.now(), confirmedAt: w.services.now() })
    await em.flush()
    const view = await read(w.engineer, key)
    const refusal = await w.engineer.post(`/api/changes/${key}/sign`, { password, contentHash: view.contentHash }).set('If-Match', etag(view)).expect(403)
    expect(refusal.body.type).toBe('/problems/own-work')
    const [entry] = await lastEntries(w)
    expect(entry.act).toBe('refused')
    expect(entry.details).toMatchObject({ asked: 'sign a peer review', refusal: 'own-work' })
  })

  it('refuses a signature with a wrong password, and records the attempt', async () => {
    await readAll(w.reviewer, key)
    const view = await read(w.reviewer, key)
    const refusal = await w.reviewer.post(`/api/changes/${key}/sign`, { password: 'not my password at all', contentHash: view.contentHash }).set('If-Match', etag(view)).expect(403)
    expect(refusal.body).toMatchObject({ type: '/problems/wrong-password', errors: [{ pointer: '/password' }] })
    expect((await lastEntries(w))[0].details).toMatchObject({ refusal: 'wrong-password' })
  })

  it('refuses a release before the peer review', async () => {
    await readAll(w.manager, key)
    const view = await read(w.manager, key)
    const refusal = await w.manager.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version: '1.0.0' }).set('If-Match', etag(view)).expect(409)
    expect(refusal.body.type).toBe('/problems/wrong-state')
  })

  it('is approved by a peer review bound to its hash', async () => {
    const view = await reviewed(w, key)
    expect(view.state).toBe('approved')
    expect(view.signatures).toMatchObject([{ meaning: 'peer review', void: false, contentHash: view.contentHash }])
    expect((await lastEntries(w, 2)).map((e) => e.act)).toEqual(['change approved', 'change peer review'])
    expect((await lastEntries(w, 2))[1].details).toMatchObject({ rowsRead: (await w.observer.get(`/api/changes/${key}/diff`).expect(200)).body.counts.rows })
  })

  it('refuses the reviewer as second signer, even as release manager', async () => {
    const em = w.orm.em.fork()
    const { RoleGrant } = await import('../../../server/modules/people/role-grant.entity.ts')
    em.create(RoleGrant, { person: w.reviewer.me.id, role: 'release manager', machine: null, grantedAt: w.services.now(), confirmedAt: w.services.now() })
    await em.flush()
    const view = await read(w.reviewer, key)
    const refusal = await w.reviewer.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version: '1.0.0' }).set('If-Match', etag(view)).expect(403)
    expect(refusal.body.detail).toContain('You signed this change already')
  })

  it('refuses a version that is none', async () => {
    const view = await read(w.manager, key)
    for (const version of ['1.0', '01.0.0', '1.0.0-rc.1', 'v1.0.0']) {
      const refusal = await w.manager.post(`/api/changes/${key}/release`, { password, contentHash: view.contentHash, version }).set('If-Match', etag(view))
      expect([400, 422]).toContain(refusal.status)
    }
    expect((await read(w.manager, key)).state).toBe('approved')
  })

  it('is released by a second person, with revisions, images, a mail to its author and ledger entries', async () => {
    await released(w, key)
    const release = (await w.observer.get('/api/machines/dunlin/releases/1.0.0').expect(200)).body as ReleaseView
    expect(release).toMatchObject({ state: 'current', sequence: 1, version: '1.0.0', contentHash: (await read(w.observer, key)).contentHash })
    expect(release.items.map((i) => [i.joint, i.revision, i.isNew])).toEqual([['l1-knee', 1, true], ['r1-knee', 1, true]])
    expect(release.signatures.map((s) => [s.meaning, s.void])).toEqual([['peer review', false], ['release', false]])
    expect((await lastEntries(w, 2)).map((e) => e.act)).toEqual(['release made', 'change released'])
    const { Mail } = await import('../../../server/modules/mail/mail.entity.ts')
    const mails = await w.orm.em.fork().find(Mail, { subject: 'Released: Dunlin 1.0.0' })
    expect(mails.map((m) => m.to)).toEqual([w.engineer.me.email])
  })

  it('is downloaded byte for byte, the same bytes every time', async () => {
    const release = (await w.builder.get('/api/machines/dunlin/releases/1.0.0').expect(200)).body as ReleaseView
    const path = '/api/machines/dunlin/releases/1.0.0/joints/l1-knee/image.bin'
    const first = await w.builder.get(path).buffer().parse((res, done) => { const parts: Buffer[] = []; res.on('data', (d: Buffer) => parts.push(d)); res.on('end', () => done(null, Buffer.concat(parts))) }).expect(200)
    const second = await w.builder.get(path).buffer().parse((res, done) => { const parts: Buffer[] = []; res.on('data', (d: Buffer) => parts.push(d)); res.on('end', () => done(null, Buffer.concat(parts))) }).expect(200)
    const bytes = first.body as Buffer
    expect(bytes.equals(second.body as Buffer)).toBe(true)
    expect(bytes.length).toBe(128)
    const digest = createHash('sha256').update(bytes).digest('hex')
    expect(digest).toBe(release.items[0].imageSha256)
    expect(first.headers['x-detent-sha256']).toBe(digest)
    // the release register of hinge 2.1.0 is a little-endian u32 at address 12
    expect(bytes.readUInt32LE(12)).toBe(1)
    expect(first.headers['content-disposition']).toMatch(/^attachment; filename="/)
  })

  it('refuses the download to an observer, and of a joint that is not there', async () => {
    await w.observer.get('/api/machines/dunlin/releases/1.0.0/joints/l1-knee/image.bin').expect(403)
    await w.builder.get('/api/machines/dunlin/releases/1.0.0/joints/l9-knee/image.bin').expect(404)
    await w.builder.get('/api/machines/dunlin/releases/1.0.0/joints/l1-knee/image.exe').expect(404)
  })

  it('refuses a download when a stored bit flipped', async () => {
    const connection = w.orm.em.getConnection()
    await connection.execute('drop trigger `release_joint_no_update`')
    await connection.execute("update release_joint set image = x'00' || substr(image, 2) where id = (select min(id) from release_joint)")
    const refusal = await w.builder.get('/api/machines/dunlin/releases/1.0.0/joints/l1-knee/image.bin').expect(500)
    expect(refusal.body).toMatchObject({ type: '/problems/verification-failed' })
    expect(refusal.body.detail).toContain('not what was signed')
  })
})
