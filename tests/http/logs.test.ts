import { Writable } from 'node:stream'
import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { buildApp } from '../../server/app.ts'
import { makeLog } from '../../server/http/log.ts'
import { mailedSecret } from '../modules/people/read-back.ts'
import { aWorkplace, password } from '../support/workplace.ts'

/** The server with everything it logs, down to the finest level. */
async function listened() {
  const w = await aWorkplace()
  let text = ''
  const log = makeLog('trace', new Writable({ write: (chunk, _encoding, done) => void ((text += String(chunk)), done()) }))
  const app = buildApp({ services: w.services, log, sessionSecret: 'a secret for tests alone' })
  return { w, app, lines: () => text.split('\n').filter(Boolean).map((line) => JSON.parse(line) as Record<string, unknown>), text: () => text }
}

describe('what is logged', () => {
  it('tells of each sign-in and each refused one: when, who, from where, under the id of the request', async () => {
    const { w, app, lines } = await listened()
    const yuna = await w.person('Yuna Brandt', [['observer', null]])
    await supertest(app).post('/api/session').send({ email: yuna.email, password }).expect(200)
    const refused = await supertest(app).post('/api/session').send({ email: yuna.email, password: 'not the right one' }).expect(401)
    const [signedIn, failed] = lines()
    expect(signedIn).toMatchObject({ level: 30, event: 'signed in', personId: yuna.id, req: { method: 'POST', url: '/api/session' } })
    expect(signedIn.time).toMatch(/^\d{4}-\d\d-\d\dT.*Z$/)
    expect(failed).toMatchObject({ level: 40, event: 'sign-in refused', req: { id: refused.body.instance } })
    expect(failed.personId).toBeUndefined()
  })

  it('holds no password, cookie, token, key or secret of a link, also when everything fails', async () => {
    const { w, app, text, lines } = await listened()
    const yuna = await w.person('Yuna Brandt', [['observer', null]])
    const agent = supertest.agent(app)
    const signIn = await agent.post('/api/session').send({ email: yuna.email, password }).expect(200)
    const cookie = (signIn.headers['set-cookie'] as unknown as string[])[0].split(';')[0].split('=')[1]
    const { token } = (await agent.get('/api/me').expect(200)).body as { token: string }
    await agent.post('/api/reset').send({ email: yuna.email }).set('X-Detent-Token', token).expect(202)
    const secret = await mailedSecret(w, yuna.email)
    await supertest(app).get('/api/machines').set('Authorization', `Bearer ${'k'.repeat(43)}`).expect(401)
    await w.orm.em.getConnection().execute('alter table ledger_entry rename to gone')
    await w.orm.em.getConnection().execute('alter table link rename to gone_too')
    await agent.post('/api/account/password').send({ current: password, next: 'another long password' }).set('X-Detent-Token', token).expect(500)
    await supertest(app).get(`/api/links/${secret}`).expect(500)
    await supertest(app).post('/api/links/use').send({ secret, password: 'another long password' }).expect(500)
    expect(lines().filter((l) => l.level === 50).length).toBeGreaterThanOrEqual(3)
    for (const hidden of [password, 'another long password', cookie, decodeURIComponent(cookie), token, 'k'.repeat(43), secret]) expect(text()).not.toContain(hidden)
  })

  it('answers opaquely, with the id under which it was logged', async () => {
    const { w, app, lines } = await listened()
    const yuna = await w.person('Yuna Brandt', [['observer', null]])
    const agent = supertest.agent(app)
    await agent.post('/api/session').send({ email: yuna.email, password }).expect(200)
    await w.orm.em.getConnection().execute('alter table machine rename to gone')
    const { body, text } = await agent.get('/api/machines').expect(500)
    expect(body).toMatchObject({ type: '/problems/unexpected', status: 500, errors: [] })
    expect(text).not.toMatch(/machine|sql|at .*\.ts/i)
    expect(lines().at(-1)).toMatchObject({ level: 50, requestId: body.instance, err: { message: expect.stringContaining('machine') } })
  })

  it('writes what people typed in one line', async () => {
    const { app, text } = await listened()
    await supertest(app).get('/api/links/%0A%7B%22level%22%3A50%7D').expect(404)
    await supertest(app).post('/api/session').send({ email: 'x\n{"level":60}', password: 'a long enough password' }).expect(401)
    for (const line of text().split('\n').filter(Boolean)) expect(() => JSON.parse(line) as unknown).not.toThrow()
    expect(text()).not.toContain('\n{"level":60}')
  })
})
