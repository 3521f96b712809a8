import argon2 from 'argon2'
import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { demoSignIns } from '../../../server/modules/people/demo-sign-ins.ts'
import { hashPassword } from '../../../server/modules/people/passwords.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { SessionRecord } from '../../../server/modules/people/session.entity.ts'
import { roles } from '../../../shared/contract/people.ts'
import { aWorkplace, password } from '../../support/workplace.ts'
import { countEntries, lastEntry, personNow } from './read-back.ts'

describe('what the sign-in page reads', () => {
  it('shows the demo people in demo mode, one at least for every role', async () => {
    const w = await aWorkplace({ DETENT_MODE: 'demo' })
    const { body } = await supertest(w.app).get('/api/workplace').expect(200)
    expect(body.mode).toBe('demo')
    expect(body.signIns).toHaveLength(8)
    expect(body.signIns[3]).toEqual({ name: 'Ingunn Veblen', email: 'ingunn.veblen@dunlin.example', password: demoSignIns[3].password, roles: 'peer reviewer, builder' })
    expect(new Set(demoSignIns.flatMap((d) => d.roles))).toEqual(new Set(roles))
    for (const d of demoSignIns) await expect(hashPassword(d.password)).resolves.toMatch(/^\$argon2id\$/)
  })

  it('shows nobody in a real workplace', async () => {
    const w = await aWorkplace()
    const { body } = await supertest(w.app).get('/api/workplace').expect(200)
    expect(body).toEqual({ mode: 'workplace', secondFactor: 'optional', signIns: [] })
  })
})

describe('signing in', () => {
  it('answers unknown, wrong, disabled and invited alike', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const gone = await w.person('Pascoe Adeyemi', [['builder', null]])
    const em = w.orm.em.fork()
    em.create(Person, { name: 'Invited', email: 'invited@dunlin.example', passwordHash: null as never, createdAt: w.services.now() })
    Object.assign(await em.findOneOrFail(Person, { id: gone.id }), { disabledAt: w.services.now() })
    await em.flush()
    const tries = [
      { email: person.email, password: `${password}!` },
      { email: 'nobody@dunlin.example', password },
      { email: gone.email, password },
      { email: 'invited@dunlin.example', password },
    ]
    const answers = []
    for (const body of tries) {
      const { status, body: problem, headers } = await supertest(w.app).post('/api/session').send(body)
      answers.push({ ...(problem as object), instance: '', status, cookie: headers['set-cookie'] })
    }
    expect(answers[0]).toMatchObject({ status: 401, type: '/problems/wrong-credentials', cookie: undefined })
    for (const answer of answers) expect(answer).toEqual(answers[0])
    await supertest(w.app).post('/api/session').send({ email: `  ${person.email.toUpperCase()} `, password }).expect(200)
  })

  it('renews the session id, and keeps only its hash', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const first = await supertest(w.app).post('/api/session').send({ email: person.email, password }).expect(200)
    const cookie = (first.headers['set-cookie'] as unknown as string[])[0]
    expect(cookie).toMatch(/^detent=s%3A[^;]+; Path=\/; Expires=[^;]+; HttpOnly; SameSite=Lax$/)
    const token = (await supertest(w.app).get('/api/me').set('Cookie', cookie.split(';')[0]).expect(200)).body.token as string
    const second = await supertest(w.app).post('/api/session').set('Cookie', cookie.split(';')[0]).set('X-Detent-Token', token).send({ email: person.email, password }).expect(200)
    expect((second.headers['set-cookie'] as unknown as string[])[0].split(';')[0]).not.toBe(cookie.split(';')[0])
    await supertest(w.app).get('/api/me').set('Cookie', cookie.split(';')[0]).expect(401)
    const id = decodeURIComponent(cookie.split(';')[0].slice('detent='.length)).slice(2).split('.')[0]
    const rows = await w.orm.em.fork().find(SessionRecord, {})
    expect(rows).toHaveLength(1)
    expect(JSON.stringify(rows)).not.toContain(id)
  })

  it('marks its cookie for TLS alone behind https', async () => {
    const w = await aWorkplace({ DETENT_BASE_URL: 'https://detent.dunlin.example' })
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const { headers } = await supertest(w.app).post('/api/session').set('X-Forwarded-Proto', 'https').send({ email: person.email, password }).expect(200)
    expect((headers['set-cookie'] as unknown as string[])[0]).toMatch(/^__Host-detent=.*; HttpOnly; Secure; SameSite=Lax$/)
    expect(headers['strict-transport-security']).toBe('max-age=31536000; includeSubDomains')
  })

  it('stops guessing at one account without locking it for others, and counts no success', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const other = await w.person('Pascoe Adeyemi', [['builder', null]])
    const attempt = (email: string, secret: string) => supertest(w.app).post('/api/session').send({ email, password: secret })
    for (let i = 0; i < 12; i += 1) await attempt(other.email, password).expect(200)
    for (let i = 0; i < 10; i += 1) await attempt(person.email, 'guess number one of many').expect(401)
    const { body, headers } = await attempt(` ${person.email.toUpperCase()}`, password).expect(429)
    expect(body).toMatchObject({ type: '/problems/too-many-requests', status: 429 })
    expect(Number(headers['retry-after'])).toBeGreaterThan(0)
    await attempt(other.email, password).expect(200)
  })

  it('refuses the demo passwords in a real workplace and takes them in the demo', async () => {
    const { email, password: shown } = demoSignIns[0]
    for (const [mode, status] of [['workplace', 401], ['demo', 200]] as const) {
      const w = await aWorkplace({ DETENT_MODE: mode })
      const em = w.orm.em.fork()
      em.create(Person, { name: 'Mirela Castanho', email, passwordHash: await hashPassword(shown), createdAt: w.services.now() })
      await em.flush()
      await supertest(w.app).post('/api/session').send({ email, password: shown }).expect(status)
    }
  })
})

describe('a password kept with less than is asked now', () => {
  it('is hashed anew at the next sign-in, and at no refused one', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const weaker = await argon2.hash(password, { type: argon2.argon2id, memoryCost: 8192, timeCost: 1, parallelism: 1 })
    await w.orm.em.fork().nativeUpdate(Person, { id: person.id }, { passwordHash: weaker })
    await supertest(w.app).post('/api/session').send({ email: person.email, password: `${password}!` }).expect(401)
    expect((await personNow(w, person.id)).passwordHash).toBe(weaker)
    await w.signIn(person)
    const { passwordHash } = await personNow(w, person.id)
    // OWASP, Password Storage Cheat Sheet: argon2id with at least 19 MiB of memory, two passes and one lane
    const [m, t, p] = ['m', 't', 'p'].map((name) => Number(new RegExp(`^\\$argon2id\\$v=19\\$.*\\b${name}=(\\d+)`).exec(passwordHash)?.[1]))
    expect(m).toBeGreaterThanOrEqual(19 * 1024)
    expect(t).toBeGreaterThanOrEqual(2)
    expect(p).toBeGreaterThanOrEqual(1)
    await w.signIn(person)
    expect((await personNow(w, person.id)).passwordHash).toBe(passwordHash)
  })
})

describe('who is signed in', () => {
  it('tells roles, acts by machine and the token', async () => {
    const w = await aWorkplace()
    const { me } = await w.as([['peer reviewer', null], ['builder', null]])
    expect(me.roles).toEqual([expect.objectContaining({ role: 'peer reviewer', machine: null, confirmed: true }), expect.objectContaining({ role: 'builder', machine: null, confirmed: true })])
    expect(me.roles[0].id).not.toBe(me.roles[1].id)
    expect(me.acts['*']).toEqual(['read', 'comment', 'return changes', 'sign peer review', 'download', 'record flashes'])
    expect(me.signingHold).toBeNull()
    expect(me.token).toMatch(/^[\w-]{32}$/)
  })
})

describe('signing out', () => {
  it('ends this session and no other', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const here = await w.signIn(person)
    const there = await w.signIn(person)
    const { body, headers } = await here.delete('/api/session').expect(200)
    expect(body).toEqual({ signedIn: false })
    expect((headers['set-cookie'] as unknown as string[])[0]).toBe('detent=; Path=/; Max-Age=0; HttpOnly; SameSite=Lax')
    await here.get('/api/me').expect(401)
    await there.get('/api/me').expect(200)
    expect(await w.orm.em.fork().count(SessionRecord)).toBe(1)
  })
})

describe('own sessions', () => {
  it('lists them, the present one marked, ids that are neither cookie nor kept hash', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const here = await w.signIn(person)
    w.at('2026-03-02T09:30:00Z')
    await w.signIn(person)
    await w.as('builder')
    const { body } = await here.get('/api/account/sessions').expect(200)
    expect(body.sessions).toHaveLength(2)
    expect(body.sessions.map((s: { current: boolean }) => s.current).sort()).toEqual([false, true])
    const kept = await w.orm.em.fork().find(SessionRecord, {})
    for (const s of body.sessions) {
      expect(s.id).toMatch(/^[0-9a-f]{24}$/)
      for (const record of kept) expect(record.idHash).not.toContain(s.id)
    }
  })

  it('ends one of them, and writes it down', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const here = await w.signIn(person)
    const there = await w.signIn(person)
    const other = (await here.get('/api/account/sessions')).body.sessions.find((s: { current: boolean }) => !s.current)
    const { body } = await here.delete(`/api/account/sessions/${other.id}`).expect(200)
    expect(body.sessions).toHaveLength(1)
    await there.get('/api/me').expect(401)
    await here.get('/api/me').expect(200)
    expect(await lastEntry(w)).toMatchObject({ act: 'session ended', personName: 'Yuna Brandt', subject: { person: 'Yuna Brandt' } })
  })

  it("does not find another person's session", async () => {
    const w = await aWorkplace()
    const mine = await w.as('builder')
    const theirs = await w.as('observer')
    const [{ id }] = (await theirs.get('/api/account/sessions')).body.sessions
    const before = await countEntries(w)
    await mine.delete(`/api/account/sessions/${id}`).expect(404)
    await theirs.get('/api/me').expect(200)
    expect(await countEntries(w)).toBe(before)
  })

  it('ends them by themselves: idle after 12 hours, for good after 7 days', async () => {
    const w = await aWorkplace()
    const person = await w.person('Yuna Brandt', [['observer', null]])
    const here = await w.signIn(person)
    w.at('2026-03-02T20:59:00Z')
    await here.get('/api/me').expect(200)
    w.at('2026-03-03T09:00:01Z')
    expect((await here.get('/api/me')).status).toBe(401)
    const kept = await w.signIn(person)
    for (let hour = 10; hour <= 168; hour += 10) {
      w.at(new Date(Date.parse('2026-03-03T09:00:01Z') + hour * 3600_000))
      if (hour < 168) await kept.get('/api/me')
    }
    w.at(new Date(Date.parse('2026-03-03T09:00:02Z') + 168 * 3600_000))
    await kept.get('/api/me').expect(401)
    await w.signIn(person)
    expect(await w.orm.em.fork().count(SessionRecord), 'what is over is swept').toBe(1)
  })
})
