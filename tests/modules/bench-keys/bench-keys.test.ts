import { beforeAll, describe, expect, it } from 'vitest'
import supertest from 'supertest'
import { routeTable } from '../../../server/app.ts'
import { BenchKey } from '../../../server/modules/bench-keys/bench-key.entity.ts'
import { Board } from '../../../server/modules/boards/board.entity.ts'
import { Receipt } from '../../../server/http/receipt.entity.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import { RoleGrant } from '../../../server/modules/people/role-grant.entity.ts'
import type { BenchKeys, MadeBenchKey } from '../../../shared/contract/bench-keys.ts'
import { lastEntries } from '../../support/ledger.ts'
import { password, type SignedIn } from '../../support/workplace.ts'
import { aBench, dumpOf, fileOf, l1, readBoard, type Bench } from '../boards/a-bench.ts'
import { countEntries } from '../people/read-back.ts'

const make = (person: SignedIn, body: object = {}) => person.post('/api/account/bench-keys', { name: 'bench two', machines: ['dunlin'], days: 30, password, ...body })
const made = async (person: SignedIn, body: object = {}) => (await make(person, body).expect(201)).body as MadeBenchKey & { secret: string }

/** A script on a bench computer: no cookie, the key alone. */
const script = (w: Bench, secret: string) => {
  const call = (method: 'get' | 'post' | 'put' | 'patch' | 'delete', path: string, body?: object) => {
    const test = supertest(w.app)[method](path).set('Authorization', `Bearer ${secret}`)
    return body === undefined ? test : test.send(body)
  }
  return { call, get: (path: string) => call('get', path), post: (path: string, body: object = {}) => call('post', path, body) }
}

describe('making a bench key', () => {
  it('shows the secret once and keeps its hash', async () => {
    const w = await aBench()
    const answer = await make(w.builder).set('Idempotency-Key', 'make-key-1').expect(201)
    const { secret, made: key, keys } = answer.body as MadeBenchKey & { secret: string }
    expect(secret).toMatch(/^detent-bench-[\w-]{43}$/)
    expect(keys).toEqual([key])
    expect(key).toMatchObject({ name: 'bench two', machines: ['dunlin'], state: 'in use', begins: secret.slice(0, 18), lastUsedAt: null, createdAt: '2026-03-02T09:00:00.000Z', expiresAt: '2026-04-01T09:00:00.000Z' })
    // nowhere at rest: not with the key, not in the receipt, not in the ledger
    const em = w.orm.em.fork()
    const stored = JSON.stringify([await em.find(BenchKey, {}), await em.find(Receipt, {}), await lastEntries(w, 5)])
    expect(stored).not.toContain(secret)
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'bench key made', details: { name: 'bench two', machines: ['dunlin'] } })
    // a repeat of the request gets its answer, without the secret
    expect((await make(w.builder).set('Idempotency-Key', 'make-key-1').expect(201)).body).toMatchObject({ secret: null, made: { id: key.id } })
    expect(await em.count(BenchKey)).toBe(1)
    expect(JSON.stringify((await w.builder.get('/api/account/bench-keys').expect(200)).body)).not.toContain(secret)
  })

  it('takes the password, and machines on which its maker may record', async () => {
    const w = await aBench()
    expect((await make(w.builder, { password: 'another long password' }).expect(403)).body.errors).toEqual([{ pointer: '/password', detail: 'is wrong' }])
    expect((await make(w.builder, { machines: ['dunlin', 'teasel'] }).expect(400)).body.errors).toEqual([{ pointer: '/machines/1', detail: 'you may not record flashes on "teasel"' }])
    await make(w.observer).expect(400)
    for (const days of [0, 366, 1.5]) await make(w.builder, { days }).expect(400)
    expect(await w.orm.em.fork().count(BenchKey)).toBe(0)
    expect(((await w.observer.get('/api/account/bench-keys').expect(200)).body as BenchKeys).machines).toEqual([])
    expect(((await w.other.get('/api/account/bench-keys').expect(200)).body as BenchKeys).machines).toMatchObject([{ key: 'dunlin', currentVersion: '1.1.0', joint: 'l1-knee' }, { key: 'teasel', currentVersion: null, joint: null }])
  })
})

describe('a bench key', () => {
  it('reads what a builder reads, downloads, and records a flash with its read-back', async () => {
    const w = await aBench()
    const { secret } = await made(w.builder)
    const bench = script(w, secret)
    await bench.get('/api/machines/dunlin').expect(200)
    await bench.get('/api/machines/dunlin/releases/1.1.0/joints/l1-knee/image.hex').expect(200)
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    const { body } = await bench.post('/api/machines/dunlin/flashes', { serial: l1, joint: 'l1-knee', release: '1.1.0', readBack: dumpOf(image, 'dump.bin') }).expect(201)
    expect(body).toMatchObject({ state: 'current', known: 'read back', knownBy: w.builder.me.name })
    expect((body as { events: { benchKey: string }[] }).events.map((e) => e.benchKey)).toEqual(['bench two', 'bench two'])
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'read-back verified', personName: w.builder.me.name, details: { benchKey: 'bench two' } })
  })

  it('reaches only its machines', async () => {
    const w = await aBench()
    const { secret } = await made(w.other, { machines: ['dunlin'] })
    const bench = script(w, secret)
    await bench.get('/api/machines/teasel').expect(404)
    await bench.post('/api/machines/teasel/flashes', { serial: l1, joint: 'l1-knee', release: '1.1.0' }).expect(404)
    expect(((await bench.get('/api/machines').expect(200)).body as { key: string }[]).map((m) => m.key)).toEqual(['dunlin'])
    await w.other.post('/api/machines/teasel/boards', { serial: l1, joint: null }).expect(201)
    await bench.get(`/api/boards/${l1}`).expect(404)
    await bench.post('/api/machines/dunlin/flashes', { serial: l1, joint: 'l1-knee', release: '1.1.0' }).expect(403)
    expect((await readBoard(w.other, l1)).machine).toBe('teasel')
  })

  it('shows when it was last used, to the minute', async () => {
    const w = await aBench()
    const { secret } = await made(w.builder)
    const last = async () => ((await w.builder.get('/api/account/bench-keys').expect(200)).body as BenchKeys).keys[0].lastUsedAt
    w.at('2026-03-02T10:00:00Z')
    await script(w, secret).get('/api/boards').expect(200)
    w.at('2026-03-02T10:00:30Z')
    await script(w, secret).get('/api/boards').expect(200)
    expect(await last()).toBe('2026-03-02T10:00:00.000Z')
    w.at('2026-03-02T10:02:00Z')
    await script(w, secret).get('/api/boards').expect(200)
    expect(await last()).toBe('2026-03-02T10:02:00.000Z')
  })

  it('ends with its time, with its revocation, with its person, and with the role', async () => {
    const w = await aBench()
    const refused = async (secret: string) => expect((await script(w, secret).get('/api/boards').expect(401)).body.detail).toMatch(/not known, or it has expired or was revoked/)
    const short = await made(w.builder, { days: 1 })
    w.at('2026-03-03T08:59:59Z')
    await script(w, short.secret).get('/api/boards').expect(200)
    w.at('2026-03-03T09:00:00Z')
    await refused(short.secret)
    // back before its end, so that sessions hold
    w.at('2026-03-02T09:30:00Z')
    const key = await made(w.builder)
    const other = await made(w.other)
    await w.other.delete(`/api/account/bench-keys/${key.made.id}`).expect(404)
    expect((await w.builder.delete(`/api/account/bench-keys/${key.made.id}`).expect(200)).body).toMatchObject({ keys: [{ state: 'revoked' }, { state: 'in use' }] })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'bench key revoked', details: { key: key.made.id } })
    await refused(key.secret)
    await w.builder.delete(`/api/account/bench-keys/${key.made.id}`).expect(409)
    // the role ends: the key reaches nothing
    const em = w.orm.em.fork()
    await em.nativeUpdate(RoleGrant, { person: w.other.me.id }, { endedAt: w.services.now() })
    expect((await script(w, other.secret).get('/api/machines').expect(403)).body.type).toBe('/problems/not-permitted')
    await script(w, other.secret).get('/api/machines/dunlin').expect(404)
    await em.nativeUpdate(Person, { id: w.other.me.id }, { disabledAt: w.services.now() })
    await refused(other.secret)
  })

  it.each([
    ['no key', 'Bearer '],
    ['another scheme', 'Basic YTpi'],
    ['a key that is none', `Bearer detent-bench-${'A'.repeat(43)}`],
    ['a key with something behind', `Bearer detent-bench-${'A'.repeat(43)} x`],
  ])('is refused: %s', async (_name, header) => {
    const w = await aBench()
    expect((await supertest(w.app).get('/api/boards').set('Authorization', header).expect(401)).body.type).toBe('/problems/not-signed-in')
  })

  it('speaks with its own rights alone, whatever session comes with it', async () => {
    const w = await aBench()
    const { secret } = await made(w.builder)
    await w.manager.get('/api/me').set('Authorization', `Bearer ${secret}`).expect(403)
    await w.manager.get('/api/ledger').set('Authorization', `Bearer ${secret}`).expect(403)
  })
})

describe('the routes a bench key may not take', () => {
  let w: Bench
  let secret: string
  beforeAll(async () => {
    w = await aBench()
    // every right there is on the maker: none of it passes on to the key
    const all = await w.as([['builder', null], ['controls engineer', null], ['peer reviewer', null], ['release manager', null], ['administrator', null], ['observer', null]])
    secret = (await made(all, { machines: ['dunlin', 'teasel'] })).secret
  })

  const taken = routeTable.filter((spec) => spec.benchKey)
  const refused = routeTable.filter((spec) => !spec.benchKey)
  const filled = (path: string) => `/api${path.replace(':machine', 'dunlin').replace(':version', '1.1.0').replaceAll(/:\w+/g, '1')}`

  it('are all but reading machines, releases, boards and firmware, and recording a flash', () => {
    expect(taken.filter((s) => s.method !== 'get').map((s) => `${s.method} ${s.path}`)).toEqual(['post /machines/:machine/flashes'])
    for (const spec of taken) expect(spec.path).toMatch(/^\/(machines|releases|boards|boards\.csv|bench-tasks|firmware)(\/|$)/)
    expect(refused.length).toBeGreaterThan(50)
  })

  it.each(refused.map((spec) => [`${spec.method} ${spec.path}`, spec] as const))('%s', async (_name, spec) => {
    const [entries, boards] = [await countEntries(w), await w.orm.em.fork().count(Board)]
    const { body, status } = await script(w, secret).call(spec.method, filled(spec.path), spec.method === 'get' ? undefined : {})
    expect(status).toBe(403)
    expect(body).toMatchObject({ type: '/problems/not-permitted', detail: expect.stringContaining('A bench key reads') as string })
    // an attempt to act is misuse and is told in the ledger; nothing else is written
    expect(await countEntries(w)).toBe(entries + (spec.method === 'get' ? 0 : 1))
    expect(await w.orm.em.fork().count(Board)).toBe(boards)
  })

  it.each(taken.map((spec) => [`${spec.method} ${spec.path}`, spec] as const))('while %s may be asked', async (_name, spec) => {
    const { status } = await script(w, secret).call(spec.method, filled(spec.path).replace('1.1.0', '9.9.9'), spec.method === 'get' ? undefined : {})
    expect([200, 400, 404]).toContain(status)
  })
})
