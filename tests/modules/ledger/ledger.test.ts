import { createHash } from 'node:crypto'
import canonicalize from 'canonicalize'
import { describe, expect, it } from 'vitest'
import { appendEntry } from '../../../server/modules/ledger/append-entry.ts'
import { LedgerEntry } from '../../../server/modules/ledger/ledger-entry.entity.ts'
import { verifyLedger } from '../../../server/modules/ledger/verify-ledger.ts'
import { aWorkplace, type Workplace } from '../../support/workplace.ts'
import { machines } from '../people/read-back.ts'

/** Acts of a week: on dunlin, on teasel and on no machine, in turns. */
async function aWeek(w: Workplace, count: number) {
  const places = ['dunlin', 'teasel', undefined]
  await w.orm.em.fork().transactional(async (em) => {
    for (let i = 0; i < count; i += 1)
      await appendEntry(em, { at: w.services.now(), person: null, act: i % 2 ? 'flash recorded' : 'change submitted', subject: { machine: places[i % 3], change: `c-${i}` }, details: { i, π: 'Größe', n: 1e21 } })
  })
}

const run = (w: Workplace, sql: string) => w.orm.em.getConnection().execute(sql)
const count = (w: Workplace) => w.orm.em.fork().count(LedgerEntry)

describe('reading the ledger', () => {
  it('gives pages of 100, newest first, each entry whole', async () => {
    const w = await aWorkplace()
    await machines(w)
    await aWeek(w, 120)
    const person = await w.as('observer')
    const { body: first } = await person.get('/api/ledger').expect(200)
    expect(first.entries).toHaveLength(100)
    expect(first.entries[0]).toEqual({
      sequence: 122,
      at: '2026-03-02T09:00:00.000Z',
      person: 'Detent',
      act: 'flash recorded',
      machine: null,
      subject: { change: 'c-119' },
      details: { i: 119, π: 'Größe', n: 1e21 },
      hash: expect.stringMatching(/^[0-9a-f]{64}$/),
      previousHash: first.entries[1].hash,
    })
    expect(first).toMatchObject({ next: 23, total: 122, acts: ['change submitted', 'flash recorded', 'machine made'] })
    const { body: last } = await person.get('/api/ledger?before=23').expect(200)
    expect(last.entries.map((e: { sequence: number }) => e.sequence)).toEqual([...Array(22).keys()].map((i) => 22 - i))
    expect(last.next).toBeNull()
  })

  it('filters by act, machine and person, by id or by name', async () => {
    const w = await aWorkplace()
    await machines(w)
    await aWeek(w, 12)
    const admin = await w.as('administrator')
    await admin.post('/api/people', { name: 'Yuna Brandt', email: 'yuna.brandt@dunlin.example', roles: [] }).expect(201)
    const found = async (query: string) => (await admin.get(`/api/ledger?${query}`).expect(200)).body
    expect((await found('act=flash%20recorded')).total).toBe(6)
    expect((await found('machine=teasel')).total).toBe(5)
    expect((await found('machine=teasel&act=flash%20recorded')).entries.map((e: { details: { i: number } }) => e.details.i)).toEqual([7, 1])
    expect((await found(`person=${admin.me.id}`)).entries.map((e: { act: string }) => e.act)).toEqual(['person invited'])
    expect((await found('person=Maker')).total).toBe(2)
    expect((await found('person=Detent')).total).toBe(12)
    expect(await found('act=&person=Nobody')).toMatchObject({ entries: [], next: null, total: 0 })
  })

  it('refuses a filter that is none', async () => {
    const w = await aWorkplace()
    const person = await w.as('observer')
    for (const query of ['before=x', 'before=-1', 'before=1e3', 'act=a&act=b', `person=${'x'.repeat(121)}`, 'machine[$ne]=x&before[$gt]=0&before=0'])
      expect((await person.get(`/api/ledger?${query}`).expect(400)).body.type).toBe('/problems/invalid-request')
  })

  it('shows who reads one machine its entries and those of no machine, whatever they ask', async () => {
    const w = await aWorkplace()
    await machines(w)
    await aWeek(w, 9)
    const person = await w.as([['builder', 'dunlin']])
    const { body } = await person.get('/api/ledger').expect(200)
    expect(new Set(body.entries.map((e: { machine: string | null }) => e.machine))).toEqual(new Set(['dunlin', null]))
    expect(body.total).toBe(7)
    expect((await person.get('/api/ledger?machine=teasel')).body).toMatchObject({ entries: [], total: 0 })
    const lines = (await person.get('/api/ledger/export.jsonl').expect(200)).text.trim().split('\n')
    expect(lines).toHaveLength(7)
    expect(lines.join()).not.toContain('teasel')
  })

  it('is not for who holds no role', async () => {
    const w = await aWorkplace()
    const person = await w.as([])
    for (const path of ['/api/ledger', '/api/ledger/verify', '/api/ledger/export.jsonl']) await person.get(path).expect(403)
  })
})

describe('exporting the ledger', () => {
  it('gives lines that prove the chain without Detent', async () => {
    const w = await aWorkplace()
    await machines(w)
    await aWeek(w, 30)
    const person = await w.as('observer')
    const { text, headers } = await person.get('/api/ledger/export.jsonl').expect(200)
    expect(headers).toMatchObject({ 'content-type': 'application/jsonl; charset=utf-8', 'content-disposition': expect.stringContaining('attachment; filename="detent-ledger-2026-03-02.jsonl"') })
    const lines = text.split('\n')
    expect(lines.pop()).toBe('')
    expect(lines).toHaveLength(32)
    let previous = '0'.repeat(64)
    lines.forEach((line, i) => {
      const { hash, ...rest } = JSON.parse(line) as { hash: string; previousHash: string; sequence: number }
      expect(canonicalize({ hash, ...rest })).toBe(line)
      expect(rest.sequence).toBe(i + 1)
      expect(rest.previousHash).toBe(previous)
      expect(createHash('sha256').update(canonicalize(rest)!).digest('hex')).toBe(hash)
      previous = hash
    })
    expect((await person.get('/api/ledger/verify')).body).toEqual({ holds: true, entries: 32, lastHash: previous })
  })

  it('and verifying go past one page of the walk', async () => {
    const w = await aWorkplace()
    await aWeek(w, 2001)
    const person = await w.as('observer')
    expect((await person.get('/api/ledger/export.jsonl')).text.split('\n')).toHaveLength(2002)
    expect((await person.get('/api/ledger/verify')).body).toMatchObject({ holds: true, entries: 2001 })
  })
})

describe('appending', () => {
  it('happens inside a transaction only, and leaves nothing of one that is rolled back', async () => {
    const w = await aWorkplace()
    await expect(appendEntry(w.orm.em.fork(), { at: w.services.now(), person: null, act: 'a' })).rejects.toThrow('inside the transaction')
    await expect(
      w.orm.em.fork().transactional(async (em) => {
        await appendEntry(em, { at: w.services.now(), person: null, act: 'a' })
        throw new Error('the act failed')
      }),
    ).rejects.toThrow('the act failed')
    expect(await count(w)).toBe(0)
  })

  it('takes its place in turn when many act at once', async () => {
    const w = await aWorkplace()
    await Promise.all([...Array(20).keys()].map((i) => w.orm.em.fork().transactional((em) => appendEntry(em, { at: w.services.now(), person: null, act: 'at once', details: { i } }))))
    expect(await verifyLedger(w.orm.em.fork())).toMatchObject({ holds: true, entries: 20 })
  })

  it('gives back whatever stood in it, and the chain holds', async () => {
    const w = await aWorkplace()
    const details = { text: 'a "quote", \\ \u0000 \u2028 \uD83D 😀 ﬁ', deep: [[[{ '': null }]]], numbers: [0.1, -0, 1e-7, 1e21, 2 ** 53, NaN], gone: undefined, __proto__x: 1 }
    await w.orm.em.fork().transactional((em) => appendEntry(em, { at: new Date('2026-03-02T09:00:00.123Z'), person: { id: 7, name: "O'Hara; drop table ledger_entry" }, act: 'noted', subject: { joint: 'knee-lf', machine: undefined }, details }))
    const [entry] = await w.orm.em.fork().find(LedgerEntry, {})
    expect(entry.details).toEqual({ ...details, numbers: [0.1, 0, 1e-7, 1e21, 2 ** 53, null], gone: undefined })
    expect(entry.subject).toEqual({ joint: 'knee-lf' })
    expect(await verifyLedger(w.orm.em.fork())).toMatchObject({ holds: true, entries: 1 })
  })

  it('orders by place, not by a clock that goes backwards', async () => {
    const w = await aWorkplace()
    await aWeek(w, 2)
    w.at('2020-01-01T00:00:00Z')
    await aWeek(w, 2)
    const person = await w.as('observer')
    expect((await person.get('/api/ledger')).body.entries.map((e: { sequence: number }) => e.sequence)).toEqual([4, 3, 2, 1])
    expect(await verifyLedger(w.orm.em.fork())).toMatchObject({ holds: true, entries: 4 })
  })
})

describe('an entry is never altered', () => {
  it.each([
    ['update', "update ledger_entry set act = 'nothing' where sequence = 2"],
    ['update that alters nothing', 'update ledger_entry set act = act'],
    ['delete', 'delete from ledger_entry where sequence = 5'],
  ])('by an SQL %s: the trigger refuses', async (_what, sql) => {
    const w = await aWorkplace()
    await aWeek(w, 5)
    await expect(run(w, sql)).rejects.toThrow('ledger_entry rows are written once')
    expect(await verifyLedger(w.orm.em.fork())).toMatchObject({ holds: true, entries: 5 })
  })

  it('by a flush: the guard refuses', async () => {
    const w = await aWorkplace()
    await aWeek(w, 3)
    const em = w.orm.em.fork()
    Object.assign(await em.findOneOrFail(LedgerEntry, { sequence: 2 }), { act: 'nothing' })
    await expect(em.flush()).rejects.toThrow('LedgerEntry rows are written once')
    const other = w.orm.em.fork()
    other.remove(await other.findOneOrFail(LedgerEntry, { sequence: 3 }))
    await expect(other.flush()).rejects.toThrow('LedgerEntry rows are written once')
    expect(await verifyLedger(w.orm.em.fork())).toMatchObject({ holds: true, entries: 3 })
  })
})

describe('verifying names the first bad entry', () => {
  // Somebody with the file itself can drop the triggers: the chain is what shows it.
  const tampered = async (sql: string[]) => {
    const w = await aWorkplace()
    await machines(w)
    await aWeek(w, 8)
    await run(w, 'drop trigger ledger_entry_no_update')
    await run(w, 'drop trigger ledger_entry_no_delete')
    for (const statement of sql) await run(w, statement)
    return (await (await w.as('observer')).get('/api/ledger/verify').expect(200)).body
  }

  it.each([
    ['an act', "update ledger_entry set act = 'change released' where sequence = 4", 4, 'content'],
    ['a person', 'update ledger_entry set person_id = 7 where sequence = 4', 4, 'content'],
    ['a name', "update ledger_entry set person_name = 'Nobody' where sequence = 4", 4, 'content'],
    ['a time', 'update ledger_entry set at = at + 1000 where sequence = 4', 4, 'content'],
    ['a machine', "update ledger_entry set machine_key = 'teasel' where sequence = 3", 3, 'content'],
    ['a subject', "update ledger_entry set subject = json_set(subject, '$.change', 'c-9') where sequence = 4", 4, 'content'],
    ['details', "update ledger_entry set details = json_set(details, '$.i', 9) where sequence = 4", 4, 'content'],
    ['a hash', `update ledger_entry set hash = '${'a'.repeat(64)}' where sequence = 4`, 4, 'content'],
    ['the link to the one before', `update ledger_entry set previous_hash = '${'a'.repeat(64)}' where sequence = 4`, 4, 'does not follow'],
    ['an entry taken out', 'delete from ledger_entry where sequence = 4', 4, 'entry 4 is missing; the next one is 5'],
    ['the first taken out', 'delete from ledger_entry where sequence = 1', 1, 'entry 1 is missing'],
  ])('%s', async (_what, sql, sequence, why) => {
    expect(await tampered([sql])).toEqual({ holds: false, entries: sequence - 1, sequence, why: expect.stringContaining(why) })
  })

  it('an entry written over with a hash that fits: the one after it does not follow', async () => {
    const w = await aWorkplace()
    await aWeek(w, 6)
    const em = w.orm.em.fork()
    const old = await em.findOneOrFail(LedgerEntry, { sequence: 3 })
    const forged = { sequence: 3, at: old.at.toISOString(), personId: null, personName: 'Detent', act: 'nothing happened', machine: old.machineKey ?? null, subject: old.subject, details: old.details, previousHash: old.previousHash }
    const hash = createHash('sha256').update(canonicalize(forged)!).digest('hex')
    await run(w, 'drop trigger ledger_entry_no_update')
    await run(w, `update ledger_entry set act = 'nothing happened', hash = '${hash}' where sequence = 3`)
    expect(await verifyLedger(w.orm.em.fork())).toEqual({ holds: false, entries: 3, sequence: 4, why: 'it does not follow the entry before it' })
  })

  it('two swapped', async () => {
    expect(await tampered(['update ledger_entry set sequence = 99 where sequence = 4', 'update ledger_entry set sequence = 4 where sequence = 5', 'update ledger_entry set sequence = 5 where sequence = 99'])).toMatchObject({ holds: false, sequence: 4 })
  })
})
