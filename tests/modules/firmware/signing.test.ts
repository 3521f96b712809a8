import { describe, expect, it } from 'vitest'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { lastEntries } from '../../support/ledger.ts'
import { smallSchemaText } from '../../support/small-schema.ts'
import { aWorkplace, password, type SignedIn, type Workplace } from '../../support/workplace.ts'

const at = '/api/firmware/hinge/2.1.0'
const stateOf = async (reader: SignedIn) => (await reader.get(at).expect(200)).body.state as string
const mailsOf = async (w: Workplace) => (await w.orm.em.fork().find(Mail, {})).map((m) => ({ to: m.to, subject: m.subject, text: m.text }))

/** Publishing needs a draft, retiring a published version; everything else is alike. */
describe.each([
  { verb: 'publish', from: 'draft', to: 'published' },
  { verb: 'retire', from: 'published', to: 'retired' },
] as const)('to $verb a firmware version', ({ verb, from, to }) => {
  async function aVersion() {
    const w = await aWorkplace()
    const author = await w.person('Writer', [['controls engineer', null], ['release manager', null]])
    const { schemaHash } = await aFirmware(w, { state: from, uploadedBy: author })
    return { w, author, manager: await w.as('release manager'), body: { password, schemaHash, imageHash: null } }
  }

  it('takes a release manager who had no part in it, and their password over the schema\'s hash', async () => {
    const { w, author, manager, body } = await aVersion()
    const signed = await manager.post(`${at}/${verb}`, body).expect(200)
    expect(signed.body).toMatchObject({ state: to, revision: 2, [`${to}By`]: manager.me.name, [`${to}At`]: '2026-03-02T09:00:00.000Z' })
    expect(await lastEntries(w)).toEqual([{ act: `firmware ${to}`, subject: { firmware: 'hinge 2.1.0' }, details: { schemaHash: body.schemaHash, imageHash: null }, personName: manager.me.name }])
    expect(await mailsOf(w)).toEqual([{ to: author.email, subject: `hinge 2.1.0 is ${to}`, text: expect.stringContaining(body.schemaHash) }])
  })

  it('is refused to whoever wrote in it, and the attempt is recorded', async () => {
    const { w, author, body } = await aVersion()
    const own = await w.signIn(author)
    const refused = await own.post(`${at}/${verb}`, body).expect(403)
    expect(refused.body).toMatchObject({ type: '/problems/own-work' })
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', personName: 'Writer', subject: { firmware: 'hinge 2.1.0' }, details: { asked: `${verb} a firmware version`, refusal: 'own-work' } }])
    expect(await stateOf(own)).toBe(from)
    expect((await own.get(at)).body.may[verb]).toEqual({ allowed: false, why: 'You wrote in it; another release manager does this.' })
    expect(await mailsOf(w)).toEqual([])
  })

  it('is refused with a wrong password, and the attempt is recorded without it', async () => {
    const { w, manager, body } = await aVersion()
    const refused = await manager.post(`${at}/${verb}`, { ...body, password: 'not this password at all' }).expect(403)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-password', errors: [{ pointer: '/password' }] })
    const [entry] = await lastEntries(w)
    expect(entry).toMatchObject({ act: 'refused', details: { refusal: 'wrong-password' } })
    expect(JSON.stringify(entry)).not.toContain('not this password at all')
    expect(await stateOf(manager)).toBe(from)
  })

  it('is refused over another schema than the one that stands there', async () => {
    const { manager, body } = await aVersion()
    const refused = await manager.post(`${at}/${verb}`, { ...body, schemaHash: 'a'.repeat(64) }).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/content-differs', errors: [{ pointer: '/schemaHash' }] })
    expect(await stateOf(manager)).toBe(from)
  })

  it('is refused to other roles and to a signing role that waits for its confirmation', async () => {
    const { w, body } = await aVersion()
    await (await w.as('controls engineer')).post(`${at}/${verb}`, body).expect(403)
    await (await w.as('administrator')).post(`${at}/${verb}`, body).expect(403)
    const fresh = await w.signIn(await w.person('Fresh', [['release manager', null]], { confirmed: false }))
    const refused = await fresh.post(`${at}/${verb}`, body).expect(403)
    expect(refused.body).toMatchObject({ type: '/problems/signing-right-unconfirmed' })
    expect(await stateOf(fresh)).toBe(from)
  })

  it('is refused a second time; the same request repeated under its key is answered again and mails once', async () => {
    const { w, manager, body } = await aVersion()
    const first = await manager.post(`${at}/${verb}`, body).set('Idempotency-Key', 'sign-hinge-210').expect(200)
    const again = await manager.post(`${at}/${verb}`, body).set('Idempotency-Key', 'sign-hinge-210').expect(200)
    expect(again.body).toEqual(first.body)
    expect((await manager.post(`${at}/${verb}`, body).expect(409)).body).toMatchObject({ type: '/problems/wrong-state' })
    expect(await mailsOf(w)).toHaveLength(1)
  })
})

describe('a firmware version', () => {
  it('counts whoever edited the draft among those who may not publish it', async () => {
    const w = await aWorkplace()
    const both = await w.person('Both', [['controls engineer', null], ['release manager', null]])
    await aFirmware(w, { state: 'draft' })
    const signedIn = await w.signIn(both)
    const saved = await signedIn.put(at, { schemaText: smallSchemaText, notes: '' }).set('If-Match', '"1"').expect(200)
    expect((await signedIn.post(`${at}/publish`, { password, schemaHash: saved.body.schemaHash, imageHash: null }).expect(403)).body).toMatchObject({ type: '/problems/own-work' })
  })

  it('is retired by the one who published it, who wrote nothing in it', async () => {
    const w = await aWorkplace()
    const manager = await w.person('Manager', [['release manager', null]])
    const { schemaHash } = await aFirmware(w, { publishedBy: manager })
    await (await w.signIn(manager)).post(`${at}/retire`, { password, schemaHash, imageHash: null }).expect(200)
  })

  it('that does not exist is not found', async () => {
    const w = await aWorkplace()
    await aFirmware(w)
    const manager = await w.as('release manager')
    await manager.post('/api/firmware/hinge/9.9.9/publish', { password, schemaHash: 'a'.repeat(64), imageHash: null }).expect(404)
    await manager.get('/api/firmware/other/2.1.0').expect(404)
  })
})
