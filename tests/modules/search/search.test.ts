import { beforeAll, describe, expect, it } from 'vitest'
import { Release } from '../../../server/modules/releases/release.entity.ts'
import { ReleaseJoint } from '../../../server/modules/releases/release-joint.entity.ts'
import { LedgerEntry } from '../../../server/modules/ledger/ledger-entry.entity.ts'
import type { FindGroup, FindKind, SearchAnswer } from '../../../shared/contract/search.ts'
import { aRelease } from '../../support/a-release.ts'
import { aWalker, aDraft, through, twoKnees, type Walker } from '../../support/a-walker.ts'
import type { SignedIn } from '../../support/workplace.ts'

let w: Walker
let stranger: SignedIn
let keeper: SignedIn
let draft: string

const search = async (person: SignedIn, q: string, all = '') => (await person.get(`/api/search?q=${encodeURIComponent(q)}${all}`).expect(200)).body as SearchAnswer
const group = async (q: string, kind: FindKind, person = w.observer): Promise<FindGroup['finds']> => (await search(person, q)).groups.find((g) => g.kind === kind)?.finds ?? []
const firstHash = async (entity: typeof Release) => (await w.orm.em.fork().findOneOrFail(entity, { version: '1.0.0', machine: { key: 'dunlin' } })).contentHash

beforeAll(async () => {
  w = await aWalker()
  await through(w, await aDraft(w), '1.0.0')
  draft = await aDraft(w, twoKnees(), 'Stiffer knee 100% for soft_mud')
  await w.builder.post('/api/machines/dunlin/flashes', { serial: 'H-0318', joint: 'l1-knee', release: '1.0.0' }).expect(201)
  // another machine, and somebody who may read nothing else
  await aRelease(w, { machine: 'heron', version: '3.1.0', title: 'First numbers for the heron' })
  stranger = await w.as([['observer', 'heron']])
  keeper = await w.as('administrator')
})

describe('the search', () => {
  it('finds joints by name, by bus and by address, and says where they lead', async () => {
    expect(await group('L1 knee', 'joint')).toEqual([{ name: 'L1 knee', note: 'Dunlin, fore 0x33, Knee', at: { page: 'joint', machine: 'dunlin', joint: 'l1-knee' } }])
    expect((await group('0x3b', 'joint')).map((f) => f.name)).toEqual(['R1 knee'])
    expect((await group('FORE', 'bus')).map((f) => f.name)).toEqual(['fore'])
    expect((await group('knee', 'family')).map((f) => f.at)).toEqual([{ page: 'family', machine: 'dunlin', family: 'knee' }])
  })

  it('finds parameters by name, by register address, and values by their number, not by its digits', async () => {
    const gain = twoKnees().families.knee.values.velocityGain as number
    expect(await group(`velocity gain ${gain}`, 'value')).toEqual([{ name: expect.stringMatching(new RegExp(`^Velocity gain ${gain} \\S*rad`)), note: 'Knee, Dunlin', at: { page: 'family', machine: 'dunlin', family: 'knee' } }])
    expect((await group(String(gain), 'value')).some((f) => f.name.startsWith('Velocity gain'))).toBe(true)
    // the digits of a value inside another one
    expect((await group(`velocity gain ${String(gain).slice(0, 1)}`, 'value'))).toEqual([])
    const registers = await group('velocity gain', 'register')
    const address = /register (0x[0-9A-F]+)/.exec(registers[0].note)![1]
    expect((await group(address, 'register')).map((f) => f.name)).toContain(registers[0].name)
    expect(registers[0].at).toEqual({ page: 'firmware', line: 'hinge', version: '2.1.0' })
  })

  it('finds boards by the beginning of a serial number, in any case, else by a part of it', async () => {
    const board = [{ name: 'H-0318', note: 'at L1 knee, Dunlin', at: { page: 'board', serial: 'H-0318' } }]
    expect(await group('h-03', 'board')).toEqual(board)
    expect(await group('318', 'board')).toEqual(board)
  })

  it('finds changes by title, number and key; percent and underscore stand for themselves', async () => {
    expect((await group('stiffer', 'change')).map((f) => f.at)).toEqual([{ page: 'change', change: draft, draft: true }])
    expect((await group('2', 'change')).map((f) => f.name)).toEqual(['Stiffer knee 100% for soft_mud'])
    expect((await group('dunlin-1', 'change')).map((f) => f.name)).toEqual(['First numbers'])
    expect(await group('dunlin 100% soft_mud', 'change')).toHaveLength(1)
    expect(await group('1_0%', 'change')).toEqual([])
  })

  it('finds releases by machine and version, firmware by line, people by name', async () => {
    expect((await group('dunlin 1.0', 'release')).map((f) => f.name)).toEqual(['Dunlin 1.0.0'])
    expect((await group('hinge', 'firmware')).map((f) => f.name)).toEqual(['hinge 2.1.0'])
    expect((await group(w.builder.me.name, 'person')).map((f) => f.note)).toContain('builder')
  })

  it('finds whatever a SHA-256 names by its first digits, typed as it is shown', async () => {
    const em = w.orm.em.fork()
    const content = await firstHash(Release)
    expect((await group(content.slice(0, 12), 'hash')).map((f) => f.note)).toContain('content of Dunlin 1.0.0')
    const [image] = await em.find(ReleaseJoint, { release: { machine: { key: 'dunlin' } } }, { populate: ['joint'] })
    expect((await group(image.imageSha256.slice(0, 12).replaceAll(/(.{4})(?=.)/g, '$1 '), 'hash'))[0]).toMatchObject({ note: `image of ${image.joint.name}, Dunlin 1.0.0`, at: { page: 'release', version: '1.0.0' } })
    const [entry] = await em.find(LedgerEntry, { act: 'flash recorded' })
    expect((await group(entry.hash.slice(0, 10), 'hash'))[0].at).toEqual({ page: 'ledger', entry: entry.sequence })
    // three digits could be anything
    expect(await group(content.slice(0, 3), 'hash')).toEqual([])
  })

  it('gives a few of each kind, more on its page, and says that there are more', async () => {
    const values = (answer: SearchAnswer) => answer.groups.find((g) => g.kind === 'register')!
    const [few, many] = [values(await search(w.observer, 'hinge')), values(await search(w.observer, 'hinge', '&all=yes'))]
    expect([few.finds.length, few.more]).toEqual([5, true])
    expect(many.finds.length).toBeGreaterThan(few.finds.length)
  })

  it('answers nothing to nothing, and to what nothing is called like', async () => {
    expect(await search(w.observer, '  ')).toEqual({ asked: '', groups: [] })
    expect((await search(w.observer, 'godwit')).groups).toEqual([])
  })
})

/** Finds but oneself, and but firmware, which belongs to no machine. */
async function strangers(person: SignedIn, q: string, open: FindKind[] = ['firmware', 'register']) {
  const finds = (await search(person, q)).groups.filter((g) => !open.includes(g.kind)).flatMap((g) => g.finds)
  return finds.filter((f) => f.at.page !== 'person' || f.at.person !== person.me.id)
}

describe('what a reader may not read', () => {
  it('is not found: machine, joints, values, boards, changes, releases, hashes', async () => {
    const content = await firstHash(Release)
    const [entry] = await w.orm.em.fork().find(LedgerEntry, { act: 'flash recorded' })
    for (const q of ['dunlin', 'L1 knee', '0x33', `velocity gain ${String(twoKnees().families.knee.values.velocityGain)}`, 'H-0318', 'stiffer', draft, '1.0.0', content.slice(0, 12), entry.hash.slice(0, 12)]) {
      expect(await strangers(stranger, q), q).toEqual([])
      expect((await search(w.observer, q)).groups.length, q).toBeGreaterThan(0)
    }
    expect((await group('heron', 'machine', stranger)).map((f) => f.name)).toEqual(['Heron'])
    expect(await group('heron', 'machine')).toEqual([])
  })

  it('is not told through people: by name only those whom one sees, by e-mail only for whoever keeps people', async () => {
    expect(await group(w.builder.me.name, 'person', stranger)).toEqual([])
    expect((await group(w.builder.me.email, 'person', keeper)).map((f) => f.name)).toEqual([w.builder.me.name])
    expect(await group(w.builder.me.email, 'person', w.observer)).toEqual([])
  })

  it('is everything for somebody without a role', async () => {
    const nobody = await w.as([])
    for (const q of ['dunlin', 'hinge', 'velocity gain', 'H-0318', (await firstHash(Release)).slice(0, 12)]) expect(await strangers(nobody, q, []), q).toEqual([])
  })
})

describe('on a large database', () => {
  it('reads each range of hashes and serial numbers from an index', async () => {
    const plan = async (sql: string) => ((await w.orm.em.getConnection().execute(`explain query plan ${sql}`)) as { detail: string }[]).map((r) => r.detail).join('\n')
    for (const [table, column] of [['`release`', 'content_hash'], ['`change`', 'content_hash'], ['revision', 'content_hash'], ['release_joint', 'image_sha256'], ['ledger_entry', 'hash'], ['board', 'serial_key']])
      expect(await plan(`select 1 from ${table} where ${column} >= 'ab' and ${column} < 'ag'`), table).toMatch(/USING (COVERING )?INDEX/)
  })
})
