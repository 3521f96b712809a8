import { beforeAll, describe, expect, it } from 'vitest'
import supertest from 'supertest'
import { DomainError } from '../../server/http/errors.ts'
import { defaultPolicy } from '../../shared/contract/policy.ts'
import { aWorkplace, password, type Workplace } from '../support/workplace.ts'
import { countEntries, machines } from '../modules/people/read-back.ts'

let w: Workplace
let cookie: string
let token: string
beforeAll(async () => {
  w = await aWorkplace()
  await machines(w)
  const person = await w.person('Silvan Okoro', [['administrator', null]])
  const { headers } = await supertest(w.app).post('/api/session').send({ email: person.email, password }).expect(200)
  cookie = (headers['set-cookie'] as unknown as string[])[0].split(';')[0]
  token = (await supertest(w.app).get('/api/me').set('Cookie', cookie)).body.token as string
})

/** A body as it is written, not as a client would. */
const raw = (path: string, body: string | Buffer, type = 'application/json') => supertest(w.app).post(`/api${path}`).set('Cookie', cookie).set('X-Detent-Token', token).set('Content-Type', type).send(body)
const policy = '/machines/dunlin/policy'
const withPolicy = (part: string) => `{"reason":"r","content":${JSON.stringify(defaultPolicy).replace('"overshootPercent":15', part)}}`

describe('a problem document', () => {
  it('has a stable type, a title, the status, a sentence, the request and its fields', async () => {
    const { body, headers } = await raw('/machines', '{"key":"Heron!","name":7}').expect(400)
    expect(headers).toMatchObject({ 'content-type': 'application/problem+json; charset=utf-8', 'cache-control': 'no-store' })
    expect(body).toEqual({
      type: '/problems/invalid-request',
      title: 'The request does not fit',
      status: 400,
      detail: expect.stringMatching(/^The request has 3 fields that do not fit\. Nothing was saved/),
      instance: expect.stringMatching(/^[0-9a-f-]{36}$/),
      errors: expect.arrayContaining([
        { pointer: '/key', detail: expect.stringContaining('form') },
        { pointer: '/name', detail: 'must be string' },
        { pointer: '/description', detail: '"description" is missing' },
      ]),
    })
  })

  it('tells nothing of what failed inside, and logs it with the request', async () => {
    const broken = await aWorkplace()
    const person = await broken.as('administrator')
    await broken.orm.em.getConnection().execute('drop table mail')
    const { body, text } = await person.get('/api/mail').expect(500)
    expect(body).toMatchObject({ type: '/problems/unexpected', errors: [], detail: expect.stringContaining(body.instance as string) })
    expect(text).not.toMatch(/sqlite|select|mail_|no such table/i)
  })

  it('is given for an address where nothing is, whatever the method', async () => {
    for (const method of ['get', 'post', 'put', 'patch', 'delete'] as const) {
      const { body } = await supertest(w.app)[method]('/api/nothing/here').set('Cookie', cookie).set('X-Detent-Token', token).expect(404)
      expect(body).toMatchObject({ type: '/problems/not-found', status: 404 })
    }
    expect((await supertest(w.app).get('/api/').expect(404)).body.type).toBe('/problems/not-found')
    expect((await supertest(w.app).get('/api/people/%E0%A4%A').set('Cookie', cookie).expect(400)).body.type).toBe('/problems/invalid-request')
    expect((await supertest(w.app).get('/nothing').expect(404)).body.type).toBe('/problems/not-found')
  })

  it('has a status and a title for each code', () => {
    const error = new DomainError('last-administrator', 'It stays.')
    expect([error.status, error.fields, error.extra, error.recorded]).toEqual([422, [], {}, false])
  })
})

describe('a body that is no JSON', () => {
  it.each([
    ['broken off', '{"key":"heron"'],
    ['NaN', withPolicy('"overshootPercent":NaN')],
    ['Infinity', withPolicy('"overshootPercent":Infinity')],
    ['a comment', '{"key":"heron" /* the bird */}'],
    ['a bare text', '"heron"'],
    ['a bare number', '7'],
    ['a raw newline in a text', '{"name":"a\nb"}'],
    ['two documents', '{}{}'],
  ])('%s', async (_what, body) => {
    const before = await countEntries(w)
    expect((await raw('/machines', body).expect(400)).body).toMatchObject({ type: '/problems/malformed-json', detail: 'The body is not valid JSON. Nothing was saved.' })
    expect(await countEntries(w)).toBe(before)
  })

  it('or in another charset or encoding', async () => {
    expect((await raw('/machines', '{}', 'application/json; charset=iso-8859-1').expect(415)).body.type).toBe('/problems/wrong-media-type')
    expect((await supertest(w.app).post('/api/machines').set('Content-Type', 'application/json').set('Content-Encoding', 'compress').send('{}').expect(415)).body.type).toBe('/problems/wrong-media-type')
  })

  it('or of another type: its fields are missing', async () => {
    for (const type of ['text/plain', 'application/x-www-form-urlencoded']) expect((await raw('/machines', 'key=heron&name=Heron&description=', type).expect(400)).body.type).toBe('/problems/invalid-request')
  })
})

describe('numbers beyond a double', () => {
  it.each(['1e999', '-1e999'])('%s is refused where it stands', async (number) => {
    const { body } = await raw(policy, withPolicy(`"overshootPercent":${number}`)).expect(400)
    expect(body).toMatchObject({ type: '/problems/invalid-request', errors: [{ pointer: '/content/overshootPercent' }] })
  })

  it.each(['"15"', 'true', 'null', '[15]', '{"value":15}'])('%s is no number', async (value) => {
    expect((await raw(policy, withPolicy(`"overshootPercent":${value}`)).expect(400)).body.errors).toEqual([{ pointer: '/content/overshootPercent', detail: 'must be number' }])
  })

  it('1e-400 is nothing, which is a number', async () => {
    const other = await aWorkplace()
    await machines(other)
    const admin = await other.as('administrator')
    const { body } = await admin.post(`/api${policy}`, JSON.parse(withPolicy('"overshootPercent":1e-400')) as object).expect(201)
    expect(body.versions[0].content.overshootPercent).toBe(0)
  })
})

describe('a body that is too much', () => {
  it('too deep: one level under the limit is judged by its fields, one over is refused as a whole', async () => {
    const nested = (levels: number) => `{"key":${'['.repeat(levels)}${']'.repeat(levels)}}`
    expect((await raw('/machines', nested(39)).expect(400)).body.errors.length).toBeGreaterThan(0)
    expect((await raw('/machines', nested(40)).expect(400)).body).toMatchObject({ errors: [{ pointer: expect.stringContaining('/key/0'), detail: expect.stringContaining('nested') }], detail: expect.stringContaining('nested deeper than 40 levels') })
    expect((await raw('/machines', nested(200_000)).expect(400)).body.detail).toContain('nested deeper')
    expect((await raw('/machines', '{"key":'.repeat(100_000) + '1' + '}'.repeat(100_000)).expect(400)).body.detail).toContain('nested deeper')
  })

  it('too large', async () => {
    expect((await raw('/machines', JSON.stringify({ key: 'heron', name: 'x'.repeat(4 * 1024 * 1024) })).expect(413)).body).toMatchObject({ type: '/problems/body-too-large', status: 413 })
    expect((await raw('/machines', JSON.stringify({ key: 'heron', name: 'x'.repeat(4_000_000), description: '' })).expect(400)).body.errors).toEqual([{ pointer: '/name', detail: expect.stringContaining('80') }])
  })

  it('too many errors are all told at once', async () => {
    const { body } = await raw('/people', JSON.stringify({ name: '', email: 'x', roles: [{ role: 'owner', machine: 'A B' }, {}], admin: true })).expect(400)
    expect(body.errors.map((e: { pointer: string }) => e.pointer)).toEqual(expect.arrayContaining(['/admin', '/name', '/email', '/roles/0/role', '/roles/0/machine', '/roles/1/role', '/roles/1/machine']))
  })
})

describe('fields that are not known', () => {
  it('are refused by name, at any depth', async () => {
    const { body } = await raw(policy, withPolicy('"overshootPercent":15,"a/b~c":1')).expect(400)
    expect(body.errors).toEqual([{ pointer: '/content/a~1b~0c', detail: '"a/b~c" is not known here' }])
  })

  it.each(['__proto__', 'constructor', 'prototype', 'toString', 'id', 'createdAt', 'retiredAt', 'lastSequence'])('%s sets nothing', async (field) => {
    const { body } = await raw('/machines', `{"key":"heron","name":"Heron","description":"","${field}":{"admin":true}}`).expect(400)
    expect(body.errors).toEqual([{ pointer: `/${field}`, detail: `"${field}" is not known here` }])
    expect(({} as { admin?: boolean }).admin).toBeUndefined()
    await supertest(w.app).get('/api/machines/heron').set('Cookie', cookie).expect(404)
  })

  it('are refused at sign-in too', async () => {
    for (const body of [{ email: 'a@b.example', password, remember: true }, { email: ['a@b.example'], password }, { email: { $ne: '' }, password }, { email: 'a@b.example', password: 7 }, { email: 'a@b.example', password: 'x'.repeat(201) }, {}, []])
      expect((await supertest(w.app).post('/api/session').send(body).expect(400)).body.type).toBe('/problems/invalid-request')
  })
})

describe('a character that the database does not give back', () => {
  it('is refused before it gets there: in a sign-in, a reason, a filter', async () => {
    expect((await supertest(w.app).post('/api/session').send({ email: 'silvan\u0000@dunlin.example', password }).expect(400)).body.errors[0].pointer).toBe('/email')
    expect((await raw(policy, JSON.stringify({ content: defaultPolicy, reason: 'a\u0000b' })).expect(400)).body.errors[0].pointer).toBe('/reason')
    for (const filter of ['act', 'machine', 'person', 'before']) expect((await supertest(w.app).get(`/api/ledger?${filter}=a%00b`).set('Cookie', cookie).expect(400)).body.type).toBe('/problems/invalid-request')
    expect((await raw('/people', JSON.stringify({ name: 'a\u0000b', email: 'a@dunlin.example', roles: [] })).expect(400)).body.errors[0].pointer).toBe('/name')
  })
})

describe('identifiers in addresses', () => {
  it.each(['1e0', '01', '1.0', '-1', ' 1', '1 ', '0x1', '١', '99999999999999999999', '1%00', "1' or '1'='1", '..%2f1', '__proto__', 'constructor'])('%s is nobody', async (id) => {
    expect((await supertest(w.app).get(`/api/people/${encodeURIComponent(id)}`).set('Cookie', cookie).expect(404)).body.type).toBe('/problems/not-found')
  })

  it.each(['DUNLIN', 'dunlin%20', '__proto__', 'constructor', '%2e%2e', "' or 1=1 --"])('%s is no machine', async (key) => {
    expect((await supertest(w.app).get(`/api/machines/${key.includes('%') ? key : encodeURIComponent(key)}/policy`).set('Cookie', cookie).expect(404)).body.type).toBe('/problems/not-found')
  })
})
