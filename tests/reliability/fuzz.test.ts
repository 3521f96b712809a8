import { createServer } from 'node:http'
import fc from 'fast-check'
import { expect, it } from 'vitest'
import { routeTable } from '../../server/app.ts'
import type { RouteSpec } from '../../server/http/route.ts'
import { roles } from '../../shared/contract/people.ts'
import { aDraft, aWalker, submitted, through, twoKnees } from '../support/a-walker.ts'
import { password } from '../support/workplace.ts'
import { arbitraryOf, hostileString } from './arbitrary-of.ts'
import { writeFigures } from './report.ts'

/** Requests of this run; the long one sets 20 000 and more, and writes its figures. */
const wanted = Number(process.env.DETENT_FUZZ ?? 600)
/** Requests on one workplace: acts of the fuzz wear it down (people disabled, changes cancelled), so that a new one is made. */
const perWorkplace = 1000
const seed = Number(process.env.DETENT_FUZZ_SEED ?? 11)

/** Names that exist in the workplace, by the parameter they stand for. */
const there: Record<string, string[]> = {
  machine: ['dunlin', 'dunlin', 'dunlin', 'heron'], change: ['dunlin-1', 'dunlin-2', 'dunlin-3', 'dunlin-4'], version: ['1.0.0', '2.1.0', '1.1.0'], joint: ['l1-knee', 'r1-knee'], family: ['knee'], bus: ['fore'], line: ['hinge'],
  person: ['1', '2', '3', '6'], mail: ['1', '2'], format: ['bin', 'hex', 'srec', 'csv', 'json', 'h'], serial: ['HB-0117'], board: ['HB-0117'],
}
const param = (name: string) => fc.oneof({ weight: 6, arbitrary: fc.constantFrom(...(there[name] ?? ['1', '2', 'dunlin', 'hinge'])) }, { weight: 1, arbitrary: hostileString })

const escaped = (text: string) => {
  try {
    return encodeURIComponent(text)
  } catch {
    // half of a surrogate pair: sent as it is, broken
    return '%ED%A0%80'
  }
}

interface Shot {
  spec: RouteSpec
  path: string
  headers: Record<string, string>
  body: string | FormData | undefined
}

const queryNames = ['machine', 'act', 'before', 'person', 'reason', 'joint', 'board', 'format', 'q', 'a', 'b', 'state', 'release', 'limit', 'x', 'y', 'kind']

function shotAt(spec: RouteSpec): fc.Arbitrary<Shot> {
  const names = [...spec.path.matchAll(/:(\w+)/g)].map((m) => m[1])
  const query = fc.dictionary(fc.constantFrom(...queryNames), fc.oneof(param('change'), param('joint'), hostileString), { maxKeys: 3 })
  const json = spec.body ? arbitraryOf(spec.body).map((v) => JSON.stringify(v)) : fc.constant('{}')
  const text = spec.upload ? fc.uint8Array({ maxLength: 2000 }).map((bytes) => formOf(spec.upload!.field, bytes)) : fc.oneof<fc.Arbitrary<string>[]>(...Array(12).fill(json), hostileString)
  return fc
    .record({ params: fc.tuple(...names.map(param)), query, body: text, ifMatch: fc.constantFrom('"1"', '"1"', '"2"', '"3"', 'W/"1"', '*', ''), key: fc.oneof(fc.constant(''), fc.uuid(), fc.constant('short')) })
    .map(({ params, query: asked, body, ifMatch, key }) => {
      let i = 0
      const path = spec.path.replaceAll(/:(\w+)/g, () => escaped(params[i++]))
      const words = Object.entries(asked).map(([name, value]) => `${name}=${escaped(value)}`).join('&')
      return {
        spec,
        path: `/api${path}${words && `?${words}`}`,
        headers: { ...(ifMatch && spec.ifMatch ? { 'If-Match': ifMatch } : {}), ...(key ? { 'Idempotency-Key': key } : {}), ...(typeof body === 'string' ? { 'Content-Type': 'application/json' } : {}) },
        body: spec.method === 'get' ? undefined : body,
      }
    })
}

function formOf(field: string, bytes: Uint8Array): FormData {
  const form = new FormData()
  form.append(bytes.length % 9 === 8 ? 'other' : field, new Blob([new Uint8Array(bytes)]), ['hinge.bin', 'a"b\r\nc.hex', '../x.bin'][bytes.length % 3])
  return form
}

/** A workplace with something of each kind in it, served on loopback, and people of every role signed in. */
async function aTarget() {
  const w = await aWalker()
  await through(w, await aDraft(w))
  await aDraft(w, twoKnees(), 'A draft')
  await submitted(w, await aDraft(w, { ...twoKnees(), families: { knee: { ...twoKnees().families.knee, values: { ...twoKnees().families.knee.values, velocityGain: 3 } } } }, 'Submitted'))
  const server = createServer(w.app)
  await new Promise<void>((done) => server.listen(0, '127.0.0.1', done))
  const { port } = server.address() as { port: number }
  const sessions: { cookie: string; token: string }[] = []
  for (const role of roles) {
    const person = await w.person(`Fuzz ${role}`, [[role, null]])
    const answered = await fetch(`http://127.0.0.1:${port}/api/session`, { method: 'POST', headers: { 'Content-Type': 'application/json' }, body: JSON.stringify({ email: person.email, password }) })
    await answered.text()
    const cookie = answered.headers.getSetCookie().map((c) => c.split(';')[0]).join('; ')
    const me = (await (await fetch(`http://127.0.0.1:${port}/api/me`, { headers: { Cookie: cookie } })).json()) as { token: string }
    sessions.push({ cookie, token: me.token })
  }
  return { port, sessions, close: async () => {
    server.closeAllConnections()
    await new Promise((done) => server.close(done))
    await w.close()
  } }
}

const statuses = new Map<number, number>()
let sent = 0

async function shoot({ port, sessions }: Awaited<ReturnType<typeof aTarget>>, { spec, path, headers, body }: Shot, by: number) {
  const { cookie, token } = sessions[by % sessions.length]
  const leave = new AbortController()
  const response = await fetch(`http://127.0.0.1:${port}${path}`, { method: spec.method.toUpperCase(), headers: { Cookie: cookie, 'X-Detent-Token': token, ...headers }, body, signal: leave.signal })
  sent += 1
  statuses.set(response.status, (statuses.get(response.status) ?? 0) + 1)
  const type = response.headers.get('content-type') ?? ''
  if (type.startsWith('text/event-stream')) {
    leave.abort()
    return
  }
  const text = await response.text()
  const told = `${spec.method} ${path}\n${typeof body === 'string' ? body.slice(0, 2000) : ''}\n${JSON.stringify(headers)}\n→ ${response.status} ${text.slice(0, 600)}`
  if (response.status >= 500) throw new Error(`the server failed: ${told}`)
  if (response.status >= 400) {
    const problem = type.startsWith('application/problem+json') ? (JSON.parse(text) as { type: string; detail: string; status: number }) : null
    if (!problem || !/^\/problems\/[a-z-]+$/.test(problem.type) || problem.detail.length < 10 || problem.status !== response.status) throw new Error(`a refusal without its words: ${told}`)
  }
}

it(`answers ${wanted} requests of every route, fitting, nearly fitting and hostile, without one failure of its own`, async () => {
  for (let round = 0; sent < wanted; round += 1) {
    const target = await aTarget()
    try {
      await fc.assert(
        fc.asyncProperty(fc.constantFrom(...routeTable).chain(shotAt), fc.nat(100), (shot, by) => shoot(target, shot, by)),
        { seed: seed + round, numRuns: Math.min(perWorkplace, wanted - sent), endOnFailure: true },
      )
    } finally {
      await target.close()
    }
  }
  const share = (from: number) => [...statuses].filter(([s]) => s >= from && s < from + 100).reduce((n, [, c]) => n + c, 0)
  expect(share(500)).toBe(0)
  // a fuzz that is refused at the door would prove nothing
  expect(share(200) / sent).toBeGreaterThan(0.1)
  if (process.env.DETENT_FUZZ)
    writeFigures('fuzz', `Seed ${seed}: ${sent} requests over ${routeTable.length} routes, no failure of the server.\n\n| status | answers |\n| --- | ---: |\n${[...statuses].sort((a, b) => a[0] - b[0]).map(([s, c]) => `| ${s} | ${c} |`).join('\n')}`, new Date())
}, Math.max(120_000, wanted * 300))
