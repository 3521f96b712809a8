import { describe, expect, it } from 'vitest'
import { recordBenchSet } from '../../../server/modules/boards/record-bench-set.ts'
import { Joint } from '../../../server/modules/machines/joint.entity.ts'
import { Machine } from '../../../server/modules/machines/machine.entity.ts'
import { Person } from '../../../server/modules/people/person.entity.ts'
import type { BoardView, DumpComparison, ReadBackResult } from '../../../shared/contract/boards.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aRelease } from '../../support/a-release.ts'
import { hingeSchema } from '../../support/a-walker.ts'
import { aBench, dumpOf, eventsOf, fileOf, flash, kneesWith, l1, readBoard, type Bench } from './a-bench.ts'

interface Register {
  address: number
  encoding: string
}

/** Where the schema file itself puts a parameter: read from the JSON, not through the program. */
const properties = (hingeSchema() as { properties: Record<string, { title: string; 'x-unit'?: string; 'x-register': Register & { access?: string } }> }).properties
const addressOf = (name: string) => properties[name]['x-register'].address

const compare = (w: Bench, bytes: Uint8Array | string, fileName?: string, release = '1.1.0') => w.builder.post('/api/machines/dunlin/joints/l1-knee/compare-dump', { release, dump: dumpOf(bytes, fileName) })
const readBack = (w: Bench, bytes: Uint8Array | string, { fileName, release }: { fileName?: string; release?: string } = {}) => w.builder.post(`/api/boards/${l1}/read-backs`, { dump: dumpOf(bytes, fileName), ...(release ? { release } : {}) })

const csvOf = (image: Uint8Array, skip: readonly number[] = []) => `address,value\n${[...image].map((b, a) => (skip.includes(a) ? '' : `${a},${b}\n`)).join('')}`

describe('a dump against a release', () => {
  it.each(['bin', 'hex', 'srec'])('is equal as .%s, as the release has it', async (format) => {
    const w = await aBench()
    const { body } = await compare(w, await fileOf(w.builder, '1.1.0', 'l1-knee', format), `board.${format}`).expect(200)
    expect(body).toMatchObject({ verdict: 'equal', release: '1.1.0', joint: 'l1-knee', format, differences: [], unexplained: [], findings: [], sequence: 2, equals: null, imageBytes: 128 })
  })

  it('is equal as a table of addresses and values', async () => {
    const w = await aBench()
    expect((await compare(w, csvOf(await fileOf(w.builder, '1.1.0', 'l1-knee')), 'board.csv').expect(200)).body).toMatchObject({ verdict: 'equal', format: 'csv' })
  })

  it('names the register of a flipped bit, in units and bytes', async () => {
    const w = await aBench()
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    // every compared parameter of the schema in turn: the lowest bit of its first byte
    const names = Object.keys(properties).filter((n) => properties[n]['x-register'] && (properties[n]['x-register'].access ?? 'rw') === 'rw')
    expect(names.length).toBeGreaterThan(15)
    for (const name of names) {
      const at = addressOf(name)
      const flipped = Buffer.from(image)
      flipped[at] ^= 1
      const found = (await compare(w, flipped).expect(200)).body as DumpComparison
      expect(found.verdict, name).toBe('differs')
      const here = found.differences.find((d) => d.address === at)
      expect(here?.kind, name).toBe('parameter')
      expect(parseInt(here!.found.slice(0, 2), 16) ^ parseInt(here!.expected.slice(0, 2), 16), name).toBe(1)
      // fields of a shared word: the one whose bits moved is named, or none when the bit is reserved
      for (const v of here!.values) expect({ found: v.found, title: v.title }, name).not.toEqual({ found: v.expected, title: v.title })
      expect(found.differences.length, name).toBe(1)
    }
  })

  it('tells the value found and the value expected', async () => {
    const w = await aBench()
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    const old = await fileOf(w.builder, '1.0.0', 'l1-knee')
    const at = addressOf('velocityGain')
    image.set(old.subarray(at, at + 4), at)
    const found = (await compare(w, image).expect(200)).body as DumpComparison
    const [difference] = found.differences
    expect(difference).toMatchObject({ address: at, values: [{ parameter: 'velocityGain', title: 'Velocity gain', unit: properties.velocityGain['x-unit'] }] })
    // in the digits that the register can hold, not 3.2000000476837158
    expect(difference.values[0]).toMatchObject({ found: 3.2, expected: 3.4 })
    // the board's own checksum does not fit these bytes
    expect(found.findings.join(' ')).toMatch(/checksum/)
  })

  it('lists bytes that no register explains, and is equal all the same', async () => {
    const w = await aBench()
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    const owned = new Set(Object.values(properties).flatMap((p) => (p['x-register'] ? [0, 1, 2, 3].map((k) => p['x-register'].address + k) : [])))
    const free = [...image.keys()].find((a) => a > 96 && a < 120 && image[a] === 255 && !owned.has(a))!
    image[free] = 0x5a
    expect((await compare(w, image).expect(200)).body).toMatchObject({ verdict: 'equal', unexplained: [{ address: free, bytes: '5A' }] })
  })

  it('says which other release it equals', async () => {
    const w = await aBench()
    const { body } = await compare(w, await fileOf(w.builder, '1.0.0', 'l1-knee')).expect(200)
    expect(body).toMatchObject({ verdict: 'differs', release: '1.1.0', equals: '1.0.0', sequence: 1 })
  })

  const refusals: [string, (image: Buffer) => Uint8Array | string, string, RegExp, object][] = [
    ['a raw dump that is cut off', (i) => i.subarray(0, 100), 'board.bin', /100 bytes, the image 128: 28 bytes are missing/, { byte: 100 }],
    ['a raw dump that is too long', (i) => Buffer.concat([i, i]), 'board.bin', /byte 128 lies beyond the image/, { byte: 128 }],
    ['a line with a wrong checksum', (i) => `:01000000${i[0].toString(16).padStart(2, '0')}00\n:00000001FF\n`, 'board.hex', /Line 1/, { line: 1 }],
    ['a table that leaves a register out', (i) => csvOf(i, [addressOf('velocityGain')]), 'board.csv', /leaves out 0x[0-9A-F]+–0x[0-9A-F]+ \(Velocity gain\)/, { missing: [addressOf('velocityGain')] }],
    ['a table that goes back', () => 'address,value\n5,1\n4,1\n', 'board.csv', /Line 3 goes back/, { line: 3 }],
    ['bytes beyond the image', () => 'address,value\n200,1\n', 'board.csv', /Line 2 writes 0x00C8, outside the image/, { line: 2 }],
    ['a name that says nothing', (i) => i, 'board.dat', /must end in \.bin, \.hex, \.srec or \.csv/, {}],
    ['an empty file', () => '', 'board.hex', /empty/, { byte: 0 }],
    ['another type of file', () => 'PK\u0003\u0004 and so on', 'board.hex', /a zip archive/, { byte: 0 }],
  ]
  it.each(refusals)('refuses %s, naming the place', async (_name, make, fileName, words, place) => {
    const w = await aBench()
    const { body } = await compare(w, make(await fileOf(w.builder, '1.1.0', 'l1-knee')), fileName).expect(422)
    expect(body).toMatchObject({ type: '/problems/content-invalid', ...place })
    expect((body as { detail: string }).detail).toMatch(words)
    expect((body as { detail: string }).detail).toMatch(/Nothing was recorded/)
  })

  it('refuses more than 1 MiB', async () => {
    const w = await aBench()
    expect((await compare(w, Buffer.alloc(1_048_577), 'board.bin')).status).toBe(413)
    await compare(w, Buffer.alloc(1_048_576), 'board.bin').expect(422)
  })

  it('refuses a file that did not arrive whole', async () => {
    const w = await aBench()
    const { body } = await w.builder.post('/api/machines/dunlin/joints/l1-knee/compare-dump', { release: '1.1.0', dump: { fileName: 'a.bin', content: 'AAA' } }).expect(422)
    expect((body as { detail: string }).detail).toMatch(/did not arrive whole/)
  })

  it('is for those who may record flashes', async () => {
    const w = await aBench()
    await w.observer.post('/api/machines/dunlin/joints/l1-knee/compare-dump', { release: '1.1.0', dump: dumpOf('x') }).expect(403)
  })
})

describe('a read-back with a flash', () => {
  it('is verified and recorded in one act', async () => {
    const w = await aBench()
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    const board = (await flash(w.builder, { serial: l1, readBack: dumpOf(image, 'h0270.bin') }).expect(201)).body as BoardView
    expect(board).toMatchObject({ state: 'current', known: 'read back', why: 'It holds 1.1.0, as read back.', lastReadBack: { verdict: 'equal', fileName: 'h0270.bin', revision: 2 } })
    expect(board.events.map((e) => e.kind)).toEqual(['read-back verified', 'flash recorded'])
    const [verified, flashed] = await lastEntries(w, 2)
    expect(verified).toMatchObject({ act: 'read-back verified', subject: { board: l1, joint: 'l1-knee', release: '1.1.0' }, details: { verdict: 'equal', comparedWith: '1.1.0', registersThatDiffer: 0 } })
    expect(flashed).toMatchObject({ act: 'flash recorded', details: { readBack: 'equal' } })
    // the dump is kept as it was uploaded
    expect(Buffer.from((await eventsOf(w)).at(-1)!.dump!).equals(image)).toBe(true)
  })

  it('that differs is recorded as such, with every register', async () => {
    const w = await aBench()
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    image[addressOf('currentLimit')] ^= 0x10
    const board = (await flash(w.builder, { serial: l1, readBack: dumpOf(image) }).expect(201)).body as BoardView
    expect(board).toMatchObject({ state: 'read-back differs', known: 'read back' })
    expect(board.events[0]).toMatchObject({ kind: 'read-back differs', readBack: { verdict: 'differs', differences: [{ address: addressOf('currentLimit'), values: [{ title: 'Current limit', unit: 'A' }] }] } })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'read-back differs', details: { registersThatDiffer: 1, registers: [addressOf('currentLimit')] } })
  })

  it('that can\'t be read records nothing at all', async () => {
    const w = await aBench()
    const { body } = await flash(w.builder, { serial: l1, readBack: dumpOf('nonsense', 'a.hex') }).expect(422)
    expect((body as { errors: { pointer: string }[] }).errors[0].pointer).toBe('/readBack/content')
    expect(await eventsOf(w)).toEqual([])
    await w.builder.get(`/api/boards/${l1}`).expect(404)
  })

  it('that equals another release says that the board holds that one', async () => {
    const w = await aBench()
    const board = (await flash(w.builder, { serial: l1, readBack: dumpOf(await fileOf(w.builder, '1.0.0', 'l1-knee')) }).expect(201)).body as BoardView
    expect(board).toMatchObject({ state: 'outdated', release: '1.0.0', known: 'read back' })
    expect(board.events[0]).toMatchObject({ kind: 'read-back verified', release: '1.0.0', note: 'holds 1.0.0, not 1.1.0' })
  })
})

describe('reading a board back later', () => {
  it('proves what was recorded, then finds that it moved, and is cleared by a flash', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    expect((await readBack(w, image).expect(201)).body).toMatchObject({ state: 'current', known: 'read back' })
    image[addressOf('positionGain')] ^= 4
    expect((await readBack(w, image).expect(201)).body).toMatchObject({ state: 'read-back differs' })
    expect((await flash(w.builder, { serial: l1 }).expect(201)).body).toMatchObject({ state: 'current', known: 'recorded' })
  })

  it('compares with the release that is named', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    const { lastReadBack } = (await readBack(w, await fileOf(w.builder, '1.0.0', 'l1-knee'), { release: '1.0.0' }).expect(201)).body as { lastReadBack: ReadBackResult }
    expect(lastReadBack).toMatchObject({ verdict: 'equal', release: '1.0.0' })
    expect(await readBoard(w.builder, l1)).toMatchObject({ state: 'outdated', release: '1.0.0' })
  })

  it('finds a withdrawn release on it', async () => {
    const w = await aBench()
    await aRelease(w, { version: '1.2.0', set: kneesWith(3.6), withdrawn: 'Hums.' })
    await flash(w.builder, { serial: l1 }).expect(201)
    const bytes = await fileOf(w.manager, '1.2.0', 'l1-knee')
    expect((await readBack(w, bytes).expect(201)).body).toMatchObject({ state: 'withdrawn release on board', release: '1.2.0' })
  })

  it('has nothing to compare with for a board that sits nowhere and holds nothing', async () => {
    const w = await aBench()
    await w.builder.post('/api/machines/dunlin/boards', { serial: l1, joint: null }).expect(201)
    expect((await readBack(w, 'x').expect(409)).body.detail).toMatch(/sits at no joint/)
    expect(await readBoard(w.builder, l1)).toMatchObject({ may: { readBack: { allowed: false }, record: { allowed: true } } })
  })
})

describe('a bench set', () => {
  it('stays on the board until it is read back equal to a release', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    await w.orm.em.fork().transactional(async (em) => {
      const machine = await em.findOneOrFail(Machine, { key: 'dunlin' })
      await recordBenchSet(em, { machine, joint: await em.findOneOrFail(Joint, { machine, key: 'l1-knee' }), serial: l1, change: 'dunlin-7', imageSha256: 'a'.repeat(64) }, { person: await em.findOneOrFail(Person, { id: w.builder.me.id }), held: [{ role: 'builder', machine: 'dunlin', confirmed: false }], benchKey: null, now: w.services.now() })
    })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'bench set on board', subject: { board: l1, joint: 'l1-knee' }, details: { change: 'dunlin-7' } })
    expect(await readBoard(w.builder, l1)).toMatchObject({ state: 'bench set on board', known: 'recorded' })
    // a flash that somebody says happened does not clear it, nor does a read-back that differs
    expect((await flash(w.builder, { serial: l1 }).expect(201)).body).toMatchObject({ state: 'bench set on board' })
    const image = await fileOf(w.builder, '1.1.0', 'l1-knee')
    const other = Buffer.from(image)
    other[addressOf('velocityGain')] ^= 1
    expect((await readBack(w, other).expect(201)).body).toMatchObject({ state: 'bench set on board' })
    expect((await readBack(w, image).expect(201)).body).toMatchObject({ state: 'current', known: 'read back' })
  })
})
