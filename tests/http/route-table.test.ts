import { beforeAll, describe, expect, it } from 'vitest'
import supertest from 'supertest'
import { routeTable } from '../../server/app.ts'
import { acts } from '../../server/modules/people/permissions.ts'
import { roles } from '../../shared/contract/people.ts'
import { aWorkplace, type SignedIn, type Workplace } from '../support/workplace.ts'
import { countEntries, machines } from '../modules/people/read-back.ts'

/** Generated from the table of routes, so that a new route without a rule fails here from its first day. */
const routes = routeTable.map((spec) => ({ spec, name: `${spec.method} ${spec.path}` }))
const walked = routes.map(({ spec, name }) => [name, spec] as const)
const filled = (path: string, machine = 'dunlin') => `/api${path.replace(':machine', machine).replaceAll(/:\w+/g, '1')}`

describe('the route table', () => {
  it('names each route once, with an act of the matrix or "signed-in", and in words', () => {
    expect(new Set(routes.map((r) => r.name)).size).toBe(routes.length)
    for (const { spec } of routes) {
      expect([...acts, 'signed-in']).toContain(spec.access)
      expect(spec.summary).toMatch(/^[a-z].*[a-z]$/)
    }
  })

  it('takes no field that it does not know, wherever it takes any', () => {
    for (const { spec } of routes) if (spec.body) expect(spec.body.additionalProperties, spec.path).toBe(false)
  })

  it('asks for a state only where something is altered', () => {
    for (const { spec } of routes) if (spec.ifMatch) expect(spec.method).not.toBe('get')
  })
})

describe('without a session', () => {
  let w: Workplace
  beforeAll(async () => {
    w = await aWorkplace()
    await machines(w)
  })

  it.each(walked)('%s answers 401 and does nothing', async (_name, spec) => {
    const before = await countEntries(w)
    const { body, headers } = await supertest(w.app)[spec.method](filled(spec.path)).send(spec.method === 'get' ? undefined : {}).expect(401)
    expect(headers['content-type']).toBe('application/problem+json; charset=utf-8')
    expect(body).toMatchObject({ type: '/problems/not-signed-in', status: 401 })
    expect(await countEntries(w)).toBe(before)
  })
})

describe('a person with every role on another machine', () => {
  let w: Workplace
  let person: SignedIn
  beforeAll(async () => {
    w = await aWorkplace()
    await machines(w)
    person = await w.as(roles.map((r) => [r, 'teasel']))
  })

  const onMachines = walked.filter(([, spec]) => spec.path.startsWith('/machines/:machine'))
  it('meets routes of machines', () => expect(onMachines.length).toBeGreaterThan(5))

  it.each(onMachines)('%s: finds nothing, the same as where nothing is', async (_name, spec) => {
    const ask = (machine: string) => {
      const path = filled(spec.path, machine)
      return spec.method === 'get' ? person.get(path) : spec.method === 'delete' ? person.delete(path) : person[spec.method](path, {})
    }
    const there = await ask('dunlin')
    const nowhere = await ask('heron')
    expect(there.status).toBe(404)
    expect({ ...(there.body as object), instance: '' }).toEqual({ ...(nowhere.body as object), instance: '' })
  })
})

describe('a person without a role', () => {
  let w: Workplace
  let person: SignedIn
  beforeAll(async () => {
    w = await aWorkplace()
    await machines(w)
    person = await w.as([])
  })

  it.each(walked.filter(([, spec]) => spec.access !== 'signed-in'))('%s: nothing', async (_name, spec) => {
    const path = filled(spec.path)
    const { status } = await (spec.method === 'get' ? person.get(path) : spec.method === 'delete' ? person.delete(path) : person[spec.method](path, {}))
    expect([403, 404]).toContain(status)
  })
})

describe('an act from another site', () => {
  let w: Workplace
  let cookie: string
  let token: string
  beforeAll(async () => {
    w = await aWorkplace()
    await machines(w)
    const person = await w.person('Silvan Okoro', roles.map((r) => [r, null]))
    const { headers } = await supertest(w.app).post('/api/session').send({ email: person.email, password: 'a long enough password' }).expect(200)
    cookie = (headers['set-cookie'] as unknown as string[])[0].split(';')[0]
    token = (await supertest(w.app).get('/api/me').set('Cookie', cookie)).body.token as string
  })

  it.each(walked.filter(([, spec]) => spec.method !== 'get'))('%s: refused, with the cookie alone and with a wrong token', async (_name, spec) => {
    const before = await countEntries(w)
    const act = () => supertest(w.app)[spec.method](filled(spec.path)).set('Cookie', cookie)
    for (const refused of [act(), act().set('X-Detent-Token', 'x'.repeat(32)), act().set('X-Detent-Token', token).set('Origin', 'https://evil.example'), act().set('X-Detent-Token', token).set('Sec-Fetch-Site', 'cross-site')])
      expect((await refused.send({}).expect(403)).body.type).toBe('/problems/cross-site')
    expect(await countEntries(w)).toBe(before)
  })

  it('is told from one of our own pages', async () => {
    for (const [header, value] of [['Origin', 'http://127.0.0.1:4870'], ['Sec-Fetch-Site', 'same-origin']])
      await supertest(w.app).post('/api/machines').set('Cookie', cookie).set('X-Detent-Token', token).set(header, value).send({}).expect(400)
    await supertest(w.app).get('/api/machines').set('Cookie', cookie).set('Sec-Fetch-Site', 'cross-site').expect(200)
  })

  it.each(['/api/session', '/api/reset', '/api/links/use'])('%s: refused by its origin though no session is there', async (path) => {
    for (const [header, value] of [['Origin', 'https://evil.example'], ['Origin', 'null'], ['Sec-Fetch-Site', 'cross-site'], ['Sec-Fetch-Site', 'same-site']])
      expect((await supertest(w.app).post(path).set(header, value).send({}).expect(403)).body.type).toBe('/problems/cross-site')
  })
})
