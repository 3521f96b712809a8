import { createServer } from 'node:http'
import { connect } from 'node:net'
import { fileURLToPath } from 'node:url'
import express, { Router } from 'express'
import supertest from 'supertest'
import { beforeAll, describe, expect, it } from 'vitest'
import { mount, route } from '../../server/http/route.ts'
import { serveClient } from '../../server/http/serve-client.ts'
import { aWorkplace, password, type SignedIn, type Workplace } from '../support/workplace.ts'
import { machines } from '../modules/people/read-back.ts'

/** A route that answers with a file of the name asked, on an app of its own: names come from machines, joints and boards. */
async function named(fileName: string): Promise<Record<string, string>> {
  const w = await aWorkplace()
  const person = await w.person('Yuna Brandt', [['observer', null]])
  const app = express()
  app.use((req, _res, next) => {
    Object.assign(req, { user: person, session: {} })
    next()
  })
  const api = Router()
  mount(api, w.services, [route({ method: 'get', path: '/file', summary: 'download a file', access: 'read', handle: () => Promise.resolve({ bytes: new Uint8Array([1]), type: 'application/octet-stream', fileName }) })])
  app.use(api)
  return (await supertest(app).get('/file').expect(200)).headers as Record<string, string>
}

describe('the name of a download (RFC 6266, RFC 8187)', () => {
  it.each([
    ['r3-knee 1.7.0.hex', 'attachment; filename="r3-knee 1.7.0.hex"; filename*=UTF-8\'\'r3-knee%201.7.0.hex'],
    ['a"b\\c.hex', 'attachment; filename="a_b_c.hex"; filename*=UTF-8\'\'a%22b%5Cc.hex'],
    ['x\r\nSet-Cookie: a=b.hex', "attachment; filename=\"x__Set-Cookie: a=b.hex\"; filename*=UTF-8''x%0D%0ASet-Cookie%3A%20a%3Db.hex"],
    ['Knie № 3 – „links“.hex', 'attachment; filename="Knie _ 3 _ _links_.hex"; filename*=UTF-8\'\'Knie%20%E2%84%96%203%20%E2%80%93%20%E2%80%9Elinks%E2%80%9C.hex'],
    ["it's (1)*.hex", "attachment; filename=\"it's (1)*.hex\"; filename*=UTF-8''it%27s%20%281%29%2A.hex"],
  ])('%j', async (name, header) => {
    const headers = await named(name)
    expect(headers['content-disposition']).toBe(header)
    expect(headers['set-cookie']).toBeUndefined()
    expect(headers['cache-control']).toBe('no-store')
  })
})

describe('what an export says it is', () => {
  let w: Workplace
  let yuna: SignedIn
  beforeAll(async () => {
    w = await aWorkplace()
    await machines(w)
    yuna = await w.as('observer')
  })

  it.each([['/api/ledger/export.csv', 'text/csv; charset=utf-8'], ['/api/ledger/export.jsonl', /charset=utf-8|jsonl/], ['/api/ledger', 'application/json; charset=utf-8']])('%s', async (path, type) => {
    const { headers } = await yuna.get(path).expect(200)
    expect(headers['content-type']).toMatch(type)
    expect(headers['x-content-type-options']).toBe('nosniff')
    if (path.includes('export')) expect(headers['content-disposition']).toMatch(/^attachment; filename="detent-ledger-\d{4}-\d\d-\d\d\.\w+"/)
  })

  it('is no formula to a spreadsheet, whatever people are called', async () => {
    const evil = await w.as([['observer', null]])
    const admin = await w.as('administrator')
    await admin.post('/api/people', { name: '=HYPERLINK("http://evil.example","x")', email: 'evil@dunlin.example', roles: [] }).expect(201)
    const { text } = await evil.get('/api/ledger/export.csv').expect(200)
    const cells = text.split('\n').flatMap((line) => line.match(/("([^"]|"")*"|[^,]*)(,|$)/g) ?? []).map((c) => c.replace(/,$/, '').replace(/^"/, ''))
    expect(text).toContain('HYPERLINK')
    for (const cell of cells) expect(cell).not.toMatch(/^[=+@]/)
  })
})

describe('what is not served', () => {
  it('are other methods, folders, and files that are not the client', async () => {
    const w = await aWorkplace()
    const app = express().use(serveClient(fileURLToPath(new URL('../../src', import.meta.url)))).use((_req, res) => void res.status(404).end())
    for (const path of ['/.git/config', '/../package.json', '/%2e%2e/package.json', '/..%2fpackage.json', '/app/', '/server/main.js']) {
      const { text, status } = await supertest(app).get(path)
      if (status === 200) expect(text, path).not.toMatch(/"name": "detent"|repositoryformatversion|Index of/)
    }
    const server = createServer(w.app)
    await new Promise<void>((done) => server.listen(0, '127.0.0.1', done))
    const { port } = server.address() as { port: number }
    const raw = (request: string) =>
      new Promise<string>((done, fail) => {
        const socket = connect(port, '127.0.0.1', () => socket.end(request))
        let got = ''
        socket.on('data', (data) => (got += String(data))).on('close', () => done(got)).on('error', fail)
      })
    try {
      const trace = await raw('TRACE /api/me HTTP/1.1\r\nHost: x\r\nCookie: detent=secret\r\nConnection: close\r\n\r\n')
      expect(trace).toMatch(/^HTTP\/1\.1 4\d\d /)
      expect(trace).not.toContain('detent=secret')
      expect(await raw('GET /api/me HTTP/1.1\r\nHost: x\r\nContent-Length: 5\r\nTransfer-Encoding: chunked\r\nConnection: close\r\n\r\n0\r\n\r\n')).toMatch(/^HTTP\/1\.1 400 /)
    } finally {
      await new Promise((done) => server.close(done))
    }
  })

  it('is believed of a proxy only behind https: a stranger does not choose the address that is throttled', async () => {
    const attempts = async (env: NodeJS.ProcessEnv) => {
      const w = await aWorkplace(env)
      const person = await w.person('Yuna Brandt', [['observer', null]])
      let status = 0
      for (let i = 0; i < 11; i += 1) ({ status } = await supertest(w.app).post('/api/session').set('X-Forwarded-For', `10.0.0.${i}`).set('X-Forwarded-Proto', 'https').send({ email: person.email, password: `${password} not` }))
      return status
    }
    expect(await attempts({})).toBe(429)
    expect(await attempts({ DETENT_BASE_URL: 'https://detent.dunlin.example' })).toBe(401)
  })
})
