import { readdirSync, readFileSync } from 'node:fs'
import { Ajv2020 } from 'ajv/dist/2020.js'
import addFormats from 'ajv-formats'
import supertest from 'supertest'
import { beforeAll, describe, expect, it } from 'vitest'
import { routeTable } from '../../server/app.ts'
import { openApiDocument, type OpenApiDocument } from '../../server/http/openapi.ts'
import { exampleBodies, exampleParams } from '../../server/http/openapi-examples.ts'
import { openPaths } from '../../server/http/openapi-open-paths.ts'
import { aDraft, aWalker, etag, read, submitted, through, type Walker } from '../support/a-walker.ts'
import { password, type SignedIn } from '../support/workplace.ts'
import { openApiForm } from './openapi-form.ts'

interface Operation {
  operationId: string
  parameters: { name: string; in: string; example?: string }[]
  requestBody?: { content: Record<string, { schema: object; example?: unknown }> }
  responses: Record<string, { content: Record<string, unknown> }>
}

const ajv = new Ajv2020({ strict: false, allErrors: true })
addFormats.default(ajv)
const document: OpenApiDocument = JSON.parse(JSON.stringify(openApiDocument(routeTable, { baseUrl: 'http://127.0.0.1:4870' }))) as OpenApiDocument
const operations = Object.entries(document.paths).flatMap(([path, item]) => Object.entries(item).map(([method, o]) => ({ path, method, of: o as Operation })))
const nameOf = (method: string, path: string) => `${method} ${path.replaceAll(/:(\w+)/g, '{$1}')}`

describe('the document of the API', () => {
  it('has the form of OpenAPI 3.1', () => {
    const validate = ajv.compile(openApiForm)
    expect(validate(document), JSON.stringify(validate.errors, null, 1)).toBe(true)
  })

  it('is not taken for one when a field is misspelt, so that the check can fail', () => {
    const wrong = structuredClone(document)
    Object.assign(Object.values(wrong.paths)[0].get as object, { sumary: 'x' })
    expect(ajv.compile(openApiForm)(wrong)).toBe(false)
  })

  it('tells of every route of the table, of the open ones, and of nothing else', () => {
    expect(operations.map((o) => `${o.method} ${o.path}`).sort()).toEqual([...routeTable, ...openPaths].map((r) => nameOf(r.method, r.path)).sort())
    expect(new Set(operations.map((o) => o.of.operationId)).size).toBe(operations.length)
  })

  it('holds the schemas that validate, each a valid JSON Schema 2020-12', () => {
    for (const { path, method, of } of operations)
      for (const { schema } of Object.values(of.requestBody?.content ?? {})) {
        expect(ajv.validateSchema(schema), `${method} ${path}: ${ajv.errorsText()}`).toBe(true)
        const spec = routeTable.find((r) => nameOf(r.method, r.path) === `${method} ${path}`)
        if (spec?.body) expect(schema).toEqual(JSON.parse(JSON.stringify(spec.body)))
      }
  })

  it('names each part of a path, and each member of the query that the routes read', () => {
    for (const { path, of } of operations) expect(of.parameters.filter((p) => p.in === 'path').map((p) => p.name)).toEqual([...path.matchAll(/\{(\w+)\}/g)].map((m) => m[1]))
    const modules = new URL('../../server/modules/', import.meta.url)
    for (const module of readdirSync(modules)) {
      const text = readFileIfThere(new URL(`${module}/routes.ts`, modules))
      const reads = [...text.matchAll(/\bquery\.(?!ts\b)(\w+)/g), ...text.matchAll(/(?:readWord|numberIn)\(query, '(\w+)'\)/g)].map((m) => m[1])
      const told = queriesToldIn(text)
      for (const name of reads) expect(told, `${module} reads ${name}`).toMatch(new RegExp(`\\b${name}: \\{`))
    }
  })

  it('gives examples that fit their schemas, and only to routes that are there', () => {
    for (const name of Object.keys(exampleBodies)) expect(routeTable.map((r) => `${r.method} ${r.path}`)).toContain(name)
    const given = operations.flatMap(({ path, of }) => Object.values(of.requestBody?.content ?? {}).filter((c) => c.example !== undefined).map((c) => ({ path, ...c })))
    const withBody = Object.keys(exampleBodies).filter((name) => routeTable.some((r) => r.body && `${r.method} ${r.path}` === name))
    expect(given.length).toBe(withBody.length + openPaths.filter((p) => p.example !== undefined).length)
    for (const { path, schema, example } of given) expect(ajv.validate(schema, example), `${path}: ${ajv.errorsText()}`).toBe(true)
  })
})

/** Everything that stands in the braces after `query:`. */
function queriesToldIn(text: string): string {
  const told: string[] = []
  for (const { index } of text.matchAll(/\bquery: \{/g)) {
    let [depth, end] = [0, text.indexOf('{', index)]
    do {
      depth += text[end] === '{' ? 1 : text[end] === '}' ? -1 : 0
      end += 1
    } while (depth > 0)
    told.push(text.slice(index, end))
  }
  return told.join(' ')
}

const readFileIfThere = (url: URL) => {
  try {
    return readFileSync(url, 'utf8')
  } catch {
    return ''
  }
}

const at = (path: string) => `/api${path.replaceAll(/[:{](\w+)\}?/g, (_, name: string) => exampleParams[name])}`

describe('its examples', () => {
  let w: Walker
  let admin: SignedIn
  beforeAll(async () => {
    w = await aWalker()
    admin = await w.as('administrator')
    await through(w, await aDraft(w), exampleParams.version)
  })

  it('are sent one after another, and each is done', async () => {
    const signers: Record<string, () => SignedIn> = { 'post /machines': () => admin, 'patch /machines/:machine': () => admin, 'post /people': () => admin, 'post /changes/:change/return': () => w.reviewer, 'post /machines/:machine/releases/:version/withdraw': () => w.manager }
    for (const [name, body] of Object.entries(exampleBodies)) {
      const [method, path] = name.split(' ') as ['post' | 'patch', string]
      const spec = routeTable.find((r) => r.method === method && r.path === path)!
      const by = signers[name]?.() ?? (/flashes|boards|bench-keys/.test(path) ? w.builder : w.engineer)
      if (path.endsWith('/cancel')) await submitted(w, exampleParams.change)
      const request = by[method](at(path), body as object)
      if (spec.ifMatch) request.set('If-Match', etag(await read(by, exampleParams.change)))
      const { status, body: answer } = await request
      expect(status, `${name}: ${JSON.stringify(answer)}`).toBeLessThan(300)
    }
  })

  it('ask for what is there, and get the media type that is told', async () => {
    const reader = await w.as([['release manager', null], ['controls engineer', null], ['builder', null], ['administrator', null]])
    // these need a draft, a firmware image, a log, or never end; their tests stand with their modules
    const elsewhere = ['/changes/{change}/bench-image', '/firmware/{line}/{version}/image', '/links/{secret}', '/changes/{change}/carry-over']
    const asked: string[] = []
    for (const { path, method, of } of operations) {
      const unknown = of.parameters.some((p) => p.in === 'path' && p.example === undefined)
      const [type] = Object.keys(Object.entries(of.responses).find(([code]) => code === '2XX')![1].content)
      if (method !== 'get' || unknown || elsewhere.includes(path) || type === 'text/event-stream') continue
      const query = of.parameters.filter((p) => p.in === 'query' && p.example !== undefined).map((p) => `${p.name}=${encodeURIComponent(p.example!)}`).join('&')
      const address = at(path.startsWith('/firmware') ? path.replaceAll('{version}', '2.1.0') : path)
      const { status, headers, body } = await reader.get(`${address}${query && `?${query}`}${path.includes('image') || path.includes('kit') ? `${query ? '&' : '?'}reason=${encodeURIComponent('looked at for the analysis')}` : ''}`)
      expect(status, `${path}: ${JSON.stringify(body)}`).toBe(200)
      if (type === '*/*') expect(headers['content-type']).not.toContain('json')
      else expect(headers['content-type'], path).toContain(type)
      asked.push(path)
    }
    expect(asked.length).toBeGreaterThan(40)
  })

  it('of the open paths are answered without a session', async () => {
    const engineer = await w.person('Mirela Castanho', [['controls engineer', null]])
    for (const { method, path, example } of openPaths) {
      if (path.includes(':') || (method === 'post' && example === undefined)) continue
      const body = example && typeof example === 'object' ? { ...example, email: engineer.email, ...('password' in example ? { password } : {}) } : undefined
      const { status } = await supertest(w.app)[method](`/api${path}`).send(body)
      expect(status, path).toBeLessThan(300)
    }
  })

  it('are read in the program by whoever is signed in', async () => {
    const { body } = await w.observer.get('/api/openapi.json').expect(200)
    expect((body as OpenApiDocument).openapi).toBe('3.1.0')
    await supertest(w.app).get('/api/openapi.json').expect(401)
  })
})
