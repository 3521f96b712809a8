import { describe, expect, it } from 'vitest'
import { Mail } from '../../../server/modules/mail/mail.entity.ts'
import type { WorkplaceKeysView } from '../../../shared/contract/keys.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aWorkplace, password, type SignedIn, type Workplace } from '../../support/workplace.ts'

const keysOf = async (person: SignedIn) => (await person.get('/api/keys').expect(200)).body as WorkplaceKeysView
const mailsOf = async (w: Workplace) => (await w.orm.em.fork().find(Mail, {}, { orderBy: { id: 'asc' } })).map(({ to, subject, text }) => ({ to, subject, text }))

describe('the keys of the workplace', () => {
  it('are read by everybody signed in, public halves alone', async () => {
    const w = await aWorkplace()
    const view = await keysOf(await w.as([]))
    expect(view.keys).toMatchObject([{ until: null, madeBy: null, releases: 0, publicKey: expect.stringContaining('BEGIN PUBLIC KEY') }])
    expect(JSON.stringify(view)).not.toContain('PRIVATE')
    expect(view.may.rotate.allowed).toBe(false)
  })

  it('are rotated by an administrator over the key they saw: the old one stays with its time', async () => {
    const w = await aWorkplace()
    const signer = await w.person('Hedda Lindqvist', [['release manager', null]])
    await w.person('Tobias Oyelaran', [['controls engineer', null]])
    const administrator = await w.as('administrator')
    const [before] = (await keysOf(administrator)).keys
    w.at('2026-03-02T10:00:00Z')
    const view = (await administrator.post('/api/keys/rotate', { password, keyId: before.keyId }).expect(200)).body as WorkplaceKeysView
    expect(view.keys).toHaveLength(2)
    expect(view.keys[0]).toMatchObject({ from: '2026-03-02T10:00:00.000Z', until: null, madeBy: administrator.me.name })
    expect(view.keys[1]).toEqual({ ...before, until: '2026-03-02T10:00:00.000Z' })
    expect(view.keys[0].keyId).not.toBe(before.keyId)
    expect(await lastEntries(w)).toEqual([{ act: 'workplace key rotated', subject: {}, personName: administrator.me.name, details: { keyId: view.keys[0].keyId, replaces: before.keyId } }])
    const mails = await mailsOf(w)
    expect(mails.map((m) => m.to).sort()).toEqual([administrator.me.email, signer.email].sort())
    for (const { text } of mails) {
      expect(text).toContain(view.keys[0].keyId)
      expect(text).toContain(before.keyId)
    }
  })

  it('are not rotated with a wrong password, and the attempt is recorded without it', async () => {
    const w = await aWorkplace()
    const administrator = await w.as('administrator')
    const [before] = (await keysOf(administrator)).keys
    const refused = await administrator.post('/api/keys/rotate', { password: 'not this one', keyId: before.keyId }).expect(403)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-password', errors: [{ pointer: '/password' }] })
    const [entry] = await lastEntries(w)
    expect(entry).toMatchObject({ act: 'refused', details: { refusal: 'wrong-password' } })
    expect(JSON.stringify(entry)).not.toContain('not this one')
    expect((await keysOf(administrator)).keys).toEqual([before])
  })

  it('are not rotated over another key than the one in use', async () => {
    const w = await aWorkplace()
    const administrator = await w.as('administrator')
    const [before] = (await keysOf(administrator)).keys
    await administrator.post('/api/keys/rotate', { password, keyId: before.keyId }).expect(200)
    const refused = await administrator.post('/api/keys/rotate', { password, keyId: before.keyId }).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/content-differs', errors: [{ pointer: '/keyId' }] })
    expect((await keysOf(administrator)).keys).toHaveLength(2)
    expect(w.services.keys.current.type).toBe('private')
  })

  it('are rotated once when the same request comes again under its key', async () => {
    const w = await aWorkplace()
    const administrator = await w.as('administrator')
    const [before] = (await keysOf(administrator)).keys
    const rotate = () => administrator.post('/api/keys/rotate', { password, keyId: before.keyId }).set('Idempotency-Key', 'rotate-once-1')
    const first = await rotate().expect(200)
    expect((await rotate().expect(200)).body).toEqual(first.body)
    expect((await keysOf(administrator)).keys).toHaveLength(2)
  })

  it('are rotated by nobody else, not even by who signs releases', async () => {
    const w = await aWorkplace()
    for (const role of ['release manager', 'controls engineer', 'observer'] as const) {
      const person = await w.as(role)
      const [key] = (await keysOf(person)).keys
      await person.post('/api/keys/rotate', { password, keyId: key.keyId }).expect(403)
      expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'rotate the key of the workplace', refusal: 'not-permitted' } }])
    }
  })
})
