import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { Link } from '../../../server/modules/people/link.entity.ts'
import { SessionRecord } from '../../../server/modules/people/session.entity.ts'
import { aWorkplace, password } from '../../support/workplace.ts'
import { countEntries, lastEntry, mailedSecret, mailsTo, personNow } from './read-back.ts'

const next = 'quite another long one'

describe('changing the own password', () => {
  it('ends every other session and unused link, keeps this one, mails and writes it down', async () => {
    const w = await aWorkplace()
    const person = await w.person('Rafiq Sandoval', [['peer reviewer', null]])
    const here = await w.signIn(person)
    const there = await w.signIn(person)
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const secret = await mailedSecret(w, person.email)
    const { body } = await here.post('/api/account/password', { current: password, next }).expect(200)
    expect(body).toEqual({ sessionsEnded: 1 })
    await here.get('/api/me').expect(200)
    await there.get('/api/me').expect(401)
    await supertest(w.app).get(`/api/links/${secret}`).expect(410)
    await supertest(w.app).post('/api/session').send({ email: person.email, password }).expect(401)
    await supertest(w.app).post('/api/session').send({ email: person.email, password: next }).expect(200)
    expect((await personNow(w, person.id)).signingHold).toBeNull()
    expect((await mailsTo(w, person.email))[0].subject).toBe('Your Detent password was changed')
    const entry = await lastEntry(w)
    expect(entry).toMatchObject({ act: 'password changed', personId: person.id })
    expect(JSON.stringify(entry)).not.toContain(next)
  })

  it('takes the present password; a wrong one is written down', async () => {
    const w = await aWorkplace()
    const here = await w.as('builder')
    const { body } = await here.post('/api/account/password', { current: 'not my password', next }).expect(403)
    expect(body).toMatchObject({ type: '/problems/wrong-password', errors: [{ pointer: '/current' }] })
    expect(await lastEntry(w)).toMatchObject({ act: 'refused', personId: here.me.id, details: { asked: 'change the own password', refusal: 'wrong-password' } })
  })

  it('takes no short one: fourteen characters are refused, fifteen taken, counted as people count', async () => {
    const w = await aWorkplace()
    const here = await w.as('builder')
    const { body } = await here.post('/api/account/password', { current: password, next: '😀🦆🔩🌊🦿🐚🔧🌾🦀🪵🐌🌫🪶🦉' }).expect(422)
    expect(body).toMatchObject({ type: '/problems/weak-password', errors: [{ pointer: '/next' }] })
    await here.post('/api/account/password', { current: password, next: '😀🦆🔩🌊🦿🐚🔧🌾🦀🪵🐌🌫🪶🦉🐟' }).expect(200)
  })
})

describe('a new password', () => {
  it('has up to 200 characters of any kind, all of which count', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const here = await w.signIn(person)
    const long = Array.from({ length: 40 }, (_, i) => `k${i * 7}ß `).join('').slice(0, 199)
    await here.post('/api/account/password', { current: password, next: `${long}x` }).expect(200)
    await supertest(w.app).post('/api/session').send({ email: person.email, password: `${long}y` }).expect(401)
    await supertest(w.app).post('/api/session').send({ email: person.email, password: `${long}X` }).expect(401)
    await supertest(w.app).post('/api/session').send({ email: person.email, password: `${long}x` }).expect(200)
  })

  it('is none of the common ones, nor the account itself, by change and by link alike', async () => {
    const w = await aWorkplace()
    const person = await w.person('Rafiq Sandoval', [['peer reviewer', null]])
    const here = await w.signIn(person)
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const secret = await mailedSecret(w, person.email)
    for (const common of ['passwordpassword', 'qwertyuiop123456', 'Rafiq Sandoval 2026']) {
      const refused = await here.post('/api/account/password', { current: password, next: common }).expect(422)
      expect(refused.body).toMatchObject({ type: '/problems/weak-password', errors: [{ pointer: '/next' }], detail: expect.stringContaining('Nothing was altered') })
      expect((await supertest(w.app).post('/api/links/use').send({ secret, password: common }).expect(422)).body.errors[0].pointer).toBe('/password')
    }
    await supertest(w.app).post('/api/links/use').send({ secret, password: next }).expect(200)
  })

  it('renews the session it is set in', async () => {
    const w = await aWorkplace()
    const here = await w.as('builder')
    const [before] = await w.orm.em.fork().find(SessionRecord, {})
    await here.post('/api/account/password', { current: password, next }).expect(200)
    const after = await w.orm.em.fork().find(SessionRecord, {})
    expect(after).toHaveLength(1)
    expect(after[0].idHash).not.toBe(before.idHash)
    await here.get('/api/me').expect(200)
  })
})

describe('asking for a reset at the sign-in page', () => {
  it('mails a link to who is known, and answers everybody alike', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const gone = await w.person('Pascoe Adeyemi', [['builder', null]])
    const admin = await w.as('administrator')
    await admin.post(`/api/people/${gone.id}/disable`).expect(200)
    const before = await countEntries(w)
    const answers = []
    for (const email of [person.email.toUpperCase(), gone.email, 'nobody@dunlin.example']) {
      const { status, body, headers } = await supertest(w.app).post('/api/reset').send({ email })
      answers.push({ status, body, type: headers['content-type'], length: headers['content-length'] })
    }
    expect(answers[0]).toMatchObject({ status: 202, body: { asked: true } })
    for (const answer of answers) expect(answer).toEqual(answers[0])
    expect(await countEntries(w)).toBe(before + 1)
    expect(await lastEntry(w)).toMatchObject({ act: 'reset asked for', personName: 'Detent', personId: null, subject: { person: 'Yuna Brandt' } })
    expect((await mailsTo(w, person.email))[0]).toMatchObject({ subject: 'Set a new Detent password', text: expect.stringContaining('If you did not ask, do nothing.') })
    expect((await mailsTo(w, gone.email)).filter((m) => m.secretLink)).toEqual([])
    expect(await mailsTo(w, 'nobody@dunlin.example')).toEqual([])
    await w.signIn(person)
  })

  it('answers no unknown address faster: neither comes before the same pause', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    for (const email of [person.email, 'nobody@dunlin.example']) {
      const order: string[] = []
      const asked = supertest(w.app).post('/api/reset').send({ email }).then(() => order.push('answer'))
      await new Promise((done) => setTimeout(() => done(order.push('pause')), 200))
      await asked
      expect(order).toEqual(['pause', 'answer'])
    }
  })

  it('fills no mailbox: three links at most are open at once, then it is limited by address', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const ask = () => supertest(w.app).post('/api/reset').send({ email: person.email })
    for (let i = 0; i < 5; i += 1) await ask().expect(202)
    expect(await mailsTo(w, person.email)).toHaveLength(3)
    expect((await ask().expect(429)).body.type).toBe('/problems/too-many-requests')
  })

  it('refuses what is no address', async () => {
    const w = await aWorkplace()
    for (const body of [{}, { email: 'nobody' }, { email: 7 }, { email: 'a@b.example', kind: 'invitation' }]) await supertest(w.app).post('/api/reset').send(body).expect(400)
  })
})

describe('a reset link', () => {
  it('sets the password once within two hours, ends all sessions and every other link', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const theirs = await w.signIn(person)
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const older = await mailedSecret(w, person.email)
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const secret = await mailedSecret(w, person.email)
    expect(secret).not.toBe(older)
    await theirs.get('/api/me').expect(200)
    const { body } = await supertest(w.app).get(`/api/links/${secret}`).expect(200)
    expect(body).toEqual({ kind: 'reset', name: 'Yuna Brandt', email: person.email, expiresAt: '2026-03-02T11:00:00.000Z' })
    expect((await supertest(w.app).post('/api/links/use').send({ secret, password: next }).expect(200)).body).toEqual({ email: person.email, signingHold: null })
    await theirs.get('/api/me').expect(401)
    await supertest(w.app).get(`/api/links/${older}`).expect(410)
    await supertest(w.app).get(`/api/links/${secret}`).expect(410)
    await supertest(w.app).post('/api/session').send({ email: person.email, password }).expect(401)
    await supertest(w.app).post('/api/session').send({ email: person.email, password: next }).expect(200)
    expect(await lastEntry(w)).toMatchObject({ act: 'password set', personId: person.id, details: { by: 'reset', signingHold: null, sessionsEnded: 1 } })
    expect((await mailsTo(w, person.email))[0].subject).toBe('Your Detent password was set')
  })

  it('expires after two hours', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const secret = await mailedSecret(w, person.email)
    w.at('2026-03-02T10:59:59Z')
    await supertest(w.app).get(`/api/links/${secret}`).expect(200)
    w.at('2026-03-02T11:00:00Z')
    expect((await supertest(w.app).post('/api/links/use').send({ secret, password: next }).expect(410)).body.type).toBe('/problems/link-expired')
    await w.signIn(person)
  })

  it.each([['peer reviewer', true], ['release manager', false]] as const)('holds the signatures of a %s until another signer confirms', async (role, confirmed) => {
    const w = await aWorkplace()
    const reviewer = await w.as('peer reviewer')
    const person = await w.person('Hedda Lindqvist', [[role, null]], { confirmed })
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    expect((await personNow(w, person.id)).signingHold).toBeNull()
    const { body } = await supertest(w.app).post('/api/links/use').send({ secret: await mailedSecret(w, person.email), password }).expect(200)
    expect(body.signingHold).toBe('password reset')
    const theirs = await w.signIn(person)
    expect(theirs.me).toMatchObject({ signingHold: 'password reset', roles: [{ role, confirmed: false }] })
    expect(theirs.me.acts['*'].filter((a) => a.startsWith('sign'))).toEqual([])
    await reviewer.post(`/api/people/${person.id}/confirm-signing`).expect(200)
    expect((await theirs.get('/api/me')).body.acts['*'].filter((a: string) => a.startsWith('sign'))).not.toEqual([])
  })

  it('is kept as a hash alone, and nothing opens without its secret', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    await supertest(w.app).post('/api/reset').send({ email: person.email }).expect(202)
    const secret = await mailedSecret(w, person.email)
    const [link] = await w.orm.em.fork().find(Link, {})
    expect(JSON.stringify(link)).not.toContain(secret)
    for (const wrong of [link.secretHash, `${secret.slice(0, -1)}${secret.endsWith('A') ? 'B' : 'A'}`, 'x'.repeat(43)]) {
      expect((await supertest(w.app).get(`/api/links/${wrong}`).expect(404)).body.type).toBe('/problems/not-found')
      await supertest(w.app).post('/api/links/use').send({ secret: wrong, password: next }).expect(404)
    }
    await supertest(w.app).post('/api/links/use').send({ secret, password: next, person: 1 }).expect(400)
    await w.signIn(person)
  })
})

describe("an administrator's reset of another person", () => {
  it('mails a link to that person, tells who asked, and sets nothing', async () => {
    const w = await aWorkplace()
    const admin = await w.as('administrator')
    const person = await w.person('Hedda Lindqvist', [['release manager', null]])
    const theirs = await w.signIn(person)
    const before = await personNow(w, person.id)
    const { body } = await admin.post(`/api/people/${person.id}/reset`).expect(200)
    expect(body.state).toBe('active')
    expect(JSON.stringify(body)).not.toContain('links/')
    const [mail] = await mailsTo(w, person.email)
    expect(mail.text).toContain(`${admin.me.name} asked for a new password of yours`)
    expect(await lastEntry(w)).toMatchObject({ act: 'reset link sent', personId: admin.me.id, subject: { person: 'Hedda Lindqvist' } })
    const after = await personNow(w, person.id)
    expect([after.passwordHash, after.signingHold]).toEqual([before.passwordHash, null])
    await theirs.get('/api/me').expect(200)
  })

  it.each(['observer', 'controls engineer', 'peer reviewer', 'release manager', 'builder'] as const)('is not for a %s', async (role) => {
    const w = await aWorkplace()
    const person = await w.person('Hedda Lindqvist', [['release manager', null]])
    await (await w.as(role)).post(`/api/people/${person.id}/reset`).expect(403)
    expect(await mailsTo(w, person.email)).toEqual([])
  })
})
