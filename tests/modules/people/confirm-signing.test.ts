import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { aWorkplace, password, type Workplace } from '../../support/workplace.ts'
import { countEntries, grantBy, grantsOf, lastEntry, machines, mailedSecret, mailsTo, personNow } from './read-back.ts'

const confirmed = async (w: Workplace, id: number) => (await grantsOf(w, id)).map((g) => Boolean(g.confirmedAt))

async function hold(w: Workplace, person: Person) {
  const em = w.orm.em.fork()
  Object.assign(await em.findOneOrFail(Person, { id: person.id }), { signingHold: 'password reset' })
  await em.flush()
}

describe('confirming a signing right', () => {
  it('takes another confirmed signer, and confirms every signing role and the hold', async () => {
    const w = await aWorkplace()
    await machines(w)
    const reviewer = await w.as('peer reviewer')
    const manager = await w.person('Hedda Lindqvist', [['release manager', 'dunlin'], ['peer reviewer', 'teasel']], { confirmed: false })
    await hold(w, manager)
    const theirs = await w.signIn(manager)
    expect((await reviewer.get(`/api/people/${manager.id}`)).body).toMatchObject({ signingHold: 'password reset', may: { confirmSigning: { allowed: true } } })
    const { body } = await reviewer.post(`/api/people/${manager.id}/confirm-signing`).expect(200)
    expect(body).toMatchObject({ signingHold: null, roles: [{ confirmed: true }, { confirmed: true }], may: { confirmSigning: { allowed: false } } })
    expect((await grantsOf(w, manager.id)).map((g) => g.confirmedBy?.id)).toEqual([reviewer.me.id, reviewer.me.id])
    expect((await theirs.get('/api/me')).body.acts.dunlin).toContain('sign release')
    expect(await lastEntry(w)).toMatchObject({ act: 'signing right confirmed', personId: reviewer.me.id, subject: { person: 'Hedda Lindqvist' }, details: { roles: ['release manager on dunlin', 'peer reviewer on teasel'], hold: 'password reset', firstSigner: false } })
    expect((await mailsTo(w, manager.email))[0].subject).toBe('Your signing right is confirmed')
  })

  it('is nobody’s own, and the attempt is written down', async () => {
    const w = await aWorkplace()
    await w.as('peer reviewer')
    const manager = await w.person('Hedda Lindqvist', [['release manager', null]], { confirmed: false })
    const theirs = await w.signIn(manager)
    expect((await theirs.post(`/api/people/${manager.id}/confirm-signing`).expect(403)).body.type).toBe('/problems/own-work')
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: manager.id, details: { asked: 'confirm a signing right', refusal: 'own-work' } })
    expect(await confirmed(w, manager.id)).toEqual([false])
  })

  it.each(['observer', 'controls engineer', 'builder', 'administrator'] as const)('is not for a %s', async (role) => {
    const w = await aWorkplace()
    const manager = await w.person('Hedda Lindqvist', [['release manager', null]], { confirmed: false })
    const person = await w.as(role)
    expect((await person.post(`/api/people/${manager.id}/confirm-signing`).expect(403)).body.type).toBe('/problems/not-permitted')
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: person.me.id, details: { refusal: 'not-permitted' } })
    expect(await confirmed(w, manager.id)).toEqual([false])
  })

  it('is not for a signer who waits themselves, by grant or by reset, while there is a confirmed one', async () => {
    const w = await aWorkplace()
    await w.as('peer reviewer')
    const manager = await w.person('Hedda Lindqvist', [['release manager', null]], { confirmed: false })
    const waiting = await w.signIn(await w.person('Ingunn Veblen', [['peer reviewer', null]], { confirmed: false }))
    await waiting.post(`/api/people/${manager.id}/confirm-signing`).expect(403)
    const held = await w.person('Rafiq Sandoval', [['peer reviewer', null]])
    await hold(w, held)
    await (await w.signIn(held)).post(`/api/people/${manager.id}/confirm-signing`).expect(403)
    expect(await confirmed(w, manager.id)).toEqual([false])
  })

  it('is not for who granted the role, nor for who asked for the reset: one person alone makes no signer', async () => {
    const w = await aWorkplace()
    const both = await w.as([['administrator', null], ['peer reviewer', null]])
    const other = await w.as('release manager')
    const granted = await w.person('Rafiq Sandoval', [['builder', null]])
    await both.post(`/api/people/${granted.id}/roles`, { role: 'release manager', machine: null }).expect(200)
    expect((await both.post(`/api/people/${granted.id}/confirm-signing`).expect(403)).body.detail).toContain('You granted this role')
    await other.post(`/api/people/${granted.id}/confirm-signing`).expect(200)

    await both.post(`/api/people/${granted.id}/reset`).expect(200)
    await supertest(w.app).post('/api/links/use').send({ secret: await mailedSecret(w, granted.email), password }).expect(200)
    expect((await both.post(`/api/people/${granted.id}/confirm-signing`).expect(403)).body.detail).toContain('You asked for the reset')
    await other.post(`/api/people/${granted.id}/confirm-signing`).expect(200)
  })

  it('waits until the person has a password, is enabled, and has something to confirm', async () => {
    const w = await aWorkplace()
    const reviewer = await w.as('peer reviewer')
    const admin = await w.as('administrator')
    const { body: invited } = await admin.post('/api/people', { name: 'Hedda Lindqvist', email: 'hedda.lindqvist@dunlin.example', roles: [{ role: 'release manager', machine: null }] }).expect(201)
    const gone = await w.person('Ingunn Veblen', [['peer reviewer', null]], { confirmed: false })
    await admin.post(`/api/people/${gone.id}/disable`).expect(200)
    const builder = await w.person('Pascoe Adeyemi', [['builder', null]])
    const before = await countEntries(w)
    for (const [id, words] of [[invited.id, 'has not set a password yet'], [gone.id, 'is disabled'], [builder.id, 'no signing right that waits']] as const)
      expect((await reviewer.post(`/api/people/${id}/confirm-signing`).expect(409)).body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringContaining(words) })
    expect(await countEntries(w)).toBe(before)
  })
})

describe('the first signers of a workplace', () => {
  it('confirm each other: an unconfirmed signer does while there is no confirmed one, then no longer', async () => {
    const w = await aWorkplace()
    const admin = await w.person('Silvan Okoro', [['administrator', null]])
    const [rafiq, hedda, ingunn] = [await w.person('Rafiq Sandoval', []), await w.person('Hedda Lindqvist', []), await w.person('Ingunn Veblen', [])]
    await grantBy(w, admin, rafiq, 'peer reviewer', { confirmed: false })
    await grantBy(w, admin, hedda, 'release manager', { confirmed: false })
    await grantBy(w, admin, ingunn, 'peer reviewer', { confirmed: false })
    const [asRafiq, asHedda] = [await w.signIn(rafiq), await w.signIn(hedda)]
    await (await w.signIn(admin)).post(`/api/people/${rafiq.id}/confirm-signing`).expect(403)
    await asRafiq.post(`/api/people/${rafiq.id}/confirm-signing`).expect(403)
    await asRafiq.post(`/api/people/${hedda.id}/confirm-signing`).expect(200)
    expect(await lastEntry(w)).toMatchObject({ act: 'signing right confirmed', details: { firstSigner: true } })
    await asRafiq.post(`/api/people/${ingunn.id}/confirm-signing`).expect(403)
    await asHedda.post(`/api/people/${rafiq.id}/confirm-signing`).expect(200)
    await asRafiq.post(`/api/people/${ingunn.id}/confirm-signing`).expect(200)
    expect([await confirmed(w, rafiq.id), await confirmed(w, hedda.id), await confirmed(w, ingunn.id)]).toEqual([[true], [true], [true]])
  })

  it('counts a confirmed signer who is disabled, held or without a password for none', async () => {
    const w = await aWorkplace()
    const held = await w.person('Held', [['peer reviewer', null]])
    await hold(w, held)
    const gone = await w.person('Gone', [['release manager', null]])
    const never = await w.person('Never came', [['release manager', null]])
    const em = w.orm.em.fork()
    Object.assign(await em.findOneOrFail(Person, { id: gone.id }), { disabledAt: w.services.now() })
    Object.assign(await em.findOneOrFail(Person, { id: never.id }), { passwordHash: null })
    await em.flush()
    const [one, two] = [await w.person('Rafiq Sandoval', [['peer reviewer', null]], { confirmed: false }), await w.person('Hedda Lindqvist', [['release manager', null]], { confirmed: false })]
    await (await w.signIn(one)).post(`/api/people/${two.id}/confirm-signing`).expect(200)
    expect(await confirmed(w, two.id)).toEqual([true])
    expect((await personNow(w, held.id)).signingHold).toBe('password reset')
  })
})
