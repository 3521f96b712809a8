import { beforeAll, describe, expect, it } from 'vitest'
import { routeTable } from '../../server/app.ts'
import type { RouteSpec } from '../../server/http/route.ts'
import { Evidence } from '../../server/modules/evidence/evidence.entity.ts'
import { acts, isSigning, may } from '../../server/modules/people/permissions.ts'
import { Person } from '../../server/modules/people/person.entity.ts'
import { roles, type Role } from '../../shared/contract/people.ts'
import { aMachine } from '../support/a-release.ts'
import { aDraft, aWalker, submitted, through, twoKnees, type Walker } from '../support/a-walker.ts'
import type { SignedIn } from '../support/workplace.ts'

/**
 * Every route × every role held on another machine alone, on a workplace where each thing that a path can name exists on "dunlin". The
 * table of routes is walked, so that a new route is judged from its first day; a parameter that is not known here fails the test.
 */

let w: Walker
let evidence = 'none'
const held = new Map<Role, SignedIn>()
let everything: SignedIn

/** What of dunlin each parameter names, and what names nothing. */
const named: Record<string, () => { there: string; nowhere: string }> = {
  machine: () => ({ there: 'dunlin', nowhere: 'heron' }),
  change: () => ({ there: 'dunlin-2', nowhere: 'dunlin-99' }),
  version: () => ({ there: '1.0.0', nowhere: '9.9.9' }),
  joint: () => ({ there: 'l1-knee', nowhere: 'x9-knee' }),
  family: () => ({ there: 'knee', nowhere: 'elbow' }),
  bus: () => ({ there: 'fore', nowhere: 'aft' }),
  format: () => ({ there: 'bin', nowhere: 'bin' }),
  serial: () => ({ there: 'HB-0117', nowhere: 'HB-9999' }),
  evidence: () => ({ there: evidence, nowhere: '999' }),
  comment: () => ({ there: '1', nowhere: '99' }),
  number: () => ({ there: '1', nowhere: '9' }),
  row: () => ({ there: encodeURIComponent('value:l1-knee:velocityGain'), nowhere: 'none' }),
}
/** Of the workplace, not of a machine: people, mail, firmware lines, one's own sessions and keys. */
const ofNoMachine = new Set(['person', 'grant', 'mail', 'line', 'before', 'session', 'key'])

/** Words that stand in what dunlin has, and in nothing else here. */
const marks = ['"dunlin', 'HB-0117', 'l1-knee', 'Stiffer knees']

const params = (spec: RouteSpec) => [...spec.path.matchAll(/:(\w+)/g)].map((m) => m[1])
const machineBound = routeTable.filter((s) => params(s).some((p) => p in named) && !params(s).some((p) => ofNoMachine.has(p)))
const wide = routeTable.filter((s) => !machineBound.includes(s))
const label = (s: RouteSpec) => `${s.method} ${s.path}`
const rows = (list: readonly RouteSpec[]) => list.map((s) => [label(s), s] as const)

const pathOf = (spec: RouteSpec, which: 'there' | 'nowhere') => `/api${spec.path.replaceAll(/:(\w+)/g, (_all, name: string) => named[name]()[which])}`

async function ask(person: SignedIn, spec: RouteSpec, path: string) {
  if (spec.method === 'get') return person.get(path)
  const request = spec.method === 'delete' ? person.delete(path) : person[spec.method](path, {})
  return request.set('If-Match', '"1"')
}

/** A refusal without what differs by what was asked: the request's id, and the name that stood in the address. */
const shape = ({ body, status }: { body: object; status: number }) => ({ status, type: (body as { type: string }).type, detail: (body as { detail: string }).detail, extra: Object.keys(body).sort() })

beforeAll(async () => {
  w = await aWalker()
  await aMachine(w, 'teasel')
  await through(w, await aDraft(w))
  await submitted(w, await aDraft(w, { ...twoKnees(), families: { knee: { ...twoKnees().families.knee, values: { ...twoKnees().families.knee.values, velocityGain: 3 } } } }, 'Stiffer knees'))
  await w.reviewer.post('/api/changes/dunlin-2/comments', { text: 'Why stiffer?', on: null }).then(() => {})
  await w.builder.post('/api/machines/dunlin/flashes', { serial: 'HB-0117', joint: 'l1-knee', release: '1.0.0', readBack: null, note: '' }).then(() => {})
  await w.builder.post('/api/machines/dunlin/boards', { serial: 'HB-0117', joint: 'l1-knee', note: '' }).then(() => {})
  const em = w.orm.em.fork()
  const [kept] = await em.find(Evidence, {}, { limit: 1 })
  if (kept) evidence = String(kept.id)
  for (const role of roles) held.set(role, await w.as([[role, 'teasel']]))
  everything = await w.as(roles.map((r) => [r, 'teasel']))
}, 120_000)

describe('the walk', () => {
  it('knows every parameter that a path holds', () => {
    for (const spec of routeTable) for (const p of params(spec)) expect(p in named || ofNoMachine.has(p), `${label(spec)}: add "${p}" here, with what it names`).toBe(true)
  })

  it('meets routes by machine and routes of the workplace', () => {
    expect(machineBound.length).toBeGreaterThan(60)
    expect(wide.length).toBeGreaterThan(30)
  })
})

describe('somebody with every role on another machine', () => {
  it.each(rows(machineBound))('%s: finds nothing, in the same words as where nothing is', async (_label, spec) => {
    const there = await ask(everything, spec, pathOf(spec, 'there'))
    const nowhere = await ask(everything, spec, pathOf(spec, 'nowhere'))
    expect(there.status, JSON.stringify(there.body)).toBe(404)
    expect(shape(there as never)).toEqual(shape(nowhere as never))
  })
})

describe.each(roles.map((r) => [r] as const))('a %s of another machine', (role) => {
  it('gets 404 from every route of this one, and alters nothing', async () => {
    const person = held.get(role)!
    const before = JSON.stringify(await w.orm.em.getConnection().execute('select id, state, revision from change'))
    for (const spec of machineBound) expect((await ask(person, spec, pathOf(spec, 'there'))).status, label(spec)).toBe(404)
    expect(JSON.stringify(await w.orm.em.getConnection().execute('select id, state, revision from change'))).toBe(before)
  })

  it('reads nothing of this one in any list, export or search', async () => {
    const person = held.get(role)!
    // who signs sees everybody and their roles, to confirm signing rights (people-seen.test.ts); the document of the API is made from the
    // program alone and is the same for everybody (openapi.test.ts), examples and all
    const lists = wide.filter((s) => s.method === 'get' && params(s).length === 0 && s.path !== '/openapi.json' && !(s.path === '/people' && isSigning(role)))
    expect(lists.length).toBeGreaterThan(15)
    for (const spec of lists) {
      for (const query of ['', '?machine=dunlin', '?q=knee', '?q=dunlin', '?q=HB-0117', '?a=release+dunlin+1.0.0&b=release+dunlin+1.0.0']) {
        const { text, body } = await person.get(`/api${spec.path}${query}`)
        const answer = text || JSON.stringify(body)
        // what was asked for may stand in the answer; what is there may not
        const shown = marks.filter((mark) => !query.toLowerCase().includes(mark.toLowerCase().replace('"', '')) && answer.toLowerCase().includes(mark.toLowerCase()))
        expect(shown, `${label(spec)}${query}`).toEqual([])
      }
    }
  })

  it('has no right there by the matrix', async () => {
    const em = w.orm.em.fork()
    expect(await em.count(Person, { id: held.get(role)!.me.id })).toBe(1)
    for (const act of acts) expect(may([{ role, machine: 'teasel', confirmed: true }], act, 'dunlin').allowed, act).toBe(false)
  })
})
