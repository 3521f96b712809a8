import { generateKeyPairSync, createHash, sign } from 'node:crypto'
import canonicalize from 'canonicalize'
import { describe, expect, it } from 'vitest'
import { parse } from 'csv-parse/sync'
import { appendEntry } from '../../../server/modules/ledger/append-entry.ts'
import { keepCheckpoint } from '../../../server/modules/ledger/keep-checkpoint.ts'
import { LedgerCheckpoint } from '../../../server/modules/ledger/ledger-checkpoint.entity.ts'
import { makeKey } from '../../../server/modules/keys/workplace-keys.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aWorkplace, type SignedIn, type Workplace } from '../../support/workplace.ts'

const run = (w: Workplace, sql: string) => w.orm.em.getConnection().execute(sql)

/** Acts noted one after another, each with its number. */
async function acts(w: Workplace, count: number) {
  for (let i = 0; i < count; i += 1) await w.orm.em.fork().transactional((em) => appendEntry(em, { at: w.services.now(), person: null, act: 'noted', details: { i } }))
}

const keep = (w: Workplace, occasion: 'daily' | 'release' = 'daily') => w.orm.em.fork().transactional((em) => keepCheckpoint(em, { key: w.services.keys.current, now: w.services.now(), occasion }))

/** Twelve entries with checkpoints at 4, 8 and 12. */
async function threeDays() {
  const w = await aWorkplace()
  for (let day = 0; day < 3; day += 1) {
    w.at(`2026-03-0${day + 2}T02:00:00Z`)
    await acts(w, 4)
    await keep(w)
  }
  const reader = await w.as('observer')
  return { w, reader, file: (await reader.get('/api/ledger/checkpoints.jsonl').expect(200)).text }
}

const hold = async (reader: SignedIn, checkpoints: string) => (await reader.post('/api/ledger/checkpoints/verify', { checkpoints }).expect(200)).body

describe('a checkpoint', () => {
  it('states the end of the ledger, and anybody proves it with the public key alone', async () => {
    const { w, file } = await threeDays()
    const lines = file.trim().split('\n')
    expect(lines).toHaveLength(3)
    const entries = (await (await w.as('observer')).get('/api/ledger')).body.entries as { sequence: number; hash: string }[]
    for (const [i, line] of lines.entries()) {
      const { signature, ...statement } = JSON.parse(line) as Record<string, string>
      expect(line).toBe(canonicalize({ ...statement, signature }))
      expect(statement).toEqual({ type: 'detent ledger checkpoint 1', sequence: 4 * (i + 1), hash: entries.find((e) => e.sequence === 4 * (i + 1))!.hash, at: `2026-03-0${i + 2}T02:00:00.000Z`, occasion: 'daily', keyId: expect.stringMatching(/^[0-9a-f]{64}$/) })
      // Ed25519 is deterministic (RFC 8032, 5.1.6): the workplace's key over the statement gives these very bytes.
      expect(sign(null, Buffer.from(canonicalize(statement)!), w.services.keys.current).toString('base64')).toBe(signature)
    }
  })

  it('is kept once for each end, inside a transaction, and never altered', async () => {
    const w = await aWorkplace()
    expect(await keep(w)).toBeNull()
    await acts(w, 1)
    expect(await keep(w)).toMatchObject({ sequence: 1 })
    expect(await keep(w, 'release')).toBeNull()
    await expect(keepCheckpoint(w.orm.em.fork(), { key: makeKey(), now: w.services.now(), occasion: 'daily' })).rejects.toThrow('inside the transaction')
    await expect(run(w, 'update ledger_checkpoint set sequence = 9')).rejects.toThrow('ledger_checkpoint rows are written once')
    await expect(run(w, 'delete from ledger_checkpoint')).rejects.toThrow('ledger_checkpoint rows are written once')
    const em = w.orm.em.fork()
    Object.assign((await em.find(LedgerCheckpoint, {}))[0], { sequence: 9 })
    await expect(em.flush()).rejects.toThrow('LedgerCheckpoint rows are written once')
  })

  it('is signed when an administrator asks, and that they asked is in the ledger', async () => {
    const w = await aWorkplace()
    const administrator = await w.as('administrator')
    const { body } = await administrator.post('/api/ledger/checkpoints').expect(201)
    expect(body).toMatchObject({ total: 1, checkpoints: [{ sequence: 1, occasion: 'asked', at: '2026-03-02T09:00:00.000Z' }], may: { sign: { allowed: true } } })
    expect(await lastEntries(w)).toMatchObject([{ act: 'checkpoint signed', personName: administrator.me.name }])
    const observer = await w.as('observer')
    expect((await observer.get('/api/ledger/checkpoints')).body).toMatchObject({ total: 1, may: { sign: { allowed: false } } })
    await observer.post('/api/ledger/checkpoints').expect(403)
    expect(await lastEntries(w)).toMatchObject([{ act: 'refused', details: { asked: 'sign a checkpoint of the ledger' } }])
    expect((await observer.get('/api/ledger/checkpoints')).body.total).toBe(1)
  })
})

describe('checkpoints kept elsewhere', () => {
  it('hold against the ledger they were taken of, in any order, however far it went on', async () => {
    const { w, reader, file } = await threeDays()
    await acts(w, 3)
    const good = { holds: true, checkpoints: 3, newest: '2026-03-04T02:00:00.000Z', upTo: 12 }
    expect(await hold(reader, file)).toEqual(good)
    expect(await hold(reader, `\n${file.trim().split('\n').reverse().join('\n\n')}`)).toEqual(good)
    expect((await reader.get('/api/ledger/checkpoints/verify').expect(200)).body).toEqual(good)
  })

  it('show a ledger that was cut short, though its chain holds', async () => {
    const { w, reader, file } = await threeDays()
    for (const trigger of ['ledger_entry_no_delete', 'ledger_checkpoint_no_delete']) await run(w, `drop trigger ${trigger}`)
    await run(w, 'delete from ledger_entry where sequence > 6')
    await run(w, 'delete from ledger_checkpoint where sequence > 6')
    expect((await reader.get('/api/ledger/verify')).body).toMatchObject({ holds: true, entries: 6 })
    expect((await reader.get('/api/ledger/checkpoints/verify')).body).toMatchObject({ holds: true, checkpoints: 1 })
    expect(await hold(reader, file)).toEqual({ holds: false, checkpoints: 3, line: 2, goodUpTo: 4, why: expect.stringContaining('the ledger ends at entry 6, and on 2026-03-03T02:00:00.000Z it reached entry 8: it was cut short') })
  })

  it('show a ledger that was written anew with hashes that fit', async () => {
    const { w, reader, file } = await threeDays()
    await run(w, 'drop trigger ledger_entry_no_update')
    const rows = (await run(w, 'select * from ledger_entry order by sequence')) as unknown as { sequence: number; at: number; act: string; person_name: string; details: string; subject: string; hash: string }[]
    let previousHash = rows[4].hash
    for (const row of rows.slice(5)) {
      const act = row.sequence === 6 ? 'nothing happened' : row.act
      const covered = { sequence: row.sequence, at: new Date(row.at).toISOString(), personId: null, personName: row.person_name, act, machine: null, subject: {}, details: JSON.parse(row.details) as unknown, previousHash }
      const hash = createHash('sha256').update(canonicalize(covered)!).digest('hex')
      await run(w, `update ledger_entry set act = '${act}', previous_hash = '${previousHash}', hash = '${hash}' where sequence = ${row.sequence}`)
      previousHash = hash
    }
    expect((await reader.get('/api/ledger/verify')).body).toMatchObject({ holds: true, entries: 12 })
    const found = { holds: false, checkpoints: 3, line: 2, goodUpTo: 4, why: expect.stringContaining('entry 8 is not the one that stood there on 2026-03-03T02:00:00.000Z: the ledger was written anew') }
    expect(await hold(reader, file)).toEqual(found)
    expect((await reader.get('/api/ledger/checkpoints/verify')).body).toEqual(found)
  })

  it('show that they were altered themselves, or belong to another workplace', async () => {
    const { reader, file } = await threeDays()
    const lines = file.trim().split('\n')
    const altered = (edit: Record<string, unknown>) => [lines[0], JSON.stringify({ ...JSON.parse(lines[1]), ...edit }), lines[2]].join('\n')
    expect(await hold(reader, altered({ at: '2026-03-09T02:00:00.000Z' }))).toMatchObject({ holds: false, line: 2, why: expect.stringContaining('signature does not hold') })
    expect(await hold(reader, altered({ sequence: 5 }))).toMatchObject({ holds: false, line: 2, why: expect.stringContaining('signature does not hold') })
    expect(await hold(reader, altered({ keyId: 'a'.repeat(64) }))).toMatchObject({ holds: false, line: 2, why: expect.stringContaining("none of this workplace's") })
    const { privateKey } = generateKeyPairSync('ed25519')
    const statement = { ...(JSON.parse(lines[1]) as object), signature: undefined }
    expect(await hold(reader, altered({ signature: sign(null, Buffer.from(canonicalize(JSON.parse(JSON.stringify(statement)))!), privateKey).toString('base64') }))).toMatchObject({ holds: false, why: expect.stringContaining('signature does not hold') })
  })

  it.each([
    ['no JSON', 'words', 'it is no JSON'],
    ['another JSON', '{"type":"other"}', 'its type is not'],
    ['null', 'null', 'its type is not'],
    ['a list', '[]', 'its type is not'],
    ['a bad sequence', '{"type":"detent ledger checkpoint 1","sequence":0.5}', 'its sequence is no entry number'],
    ['a bad hash', '{"type":"detent ledger checkpoint 1","sequence":1,"hash":"x"}', 'no SHA-256'],
    ['a bad time', `{"type":"detent ledger checkpoint 1","sequence":1,"hash":"${'a'.repeat(64)}","keyId":"${'a'.repeat(64)}","at":"noon","signature":""}`, 'its time or signature'],
    ['a bad occasion', `{"type":"detent ledger checkpoint 1","sequence":1,"hash":"${'a'.repeat(64)}","keyId":"${'a'.repeat(64)}","at":"2026-03-02T02:00:00Z","signature":"","occasion":"party"}`, 'its occasion is unknown'],
    ['nothing', '\n \n', 'holds no checkpoint'],
  ])('are told from %s', async (_what, text, why) => {
    const w = await aWorkplace()
    expect(await hold(await w.as('observer'), text)).toMatchObject({ holds: false, line: 1, goodUpTo: 0, why: expect.stringContaining(why) })
  })
})

describe('the export as a table', () => {
  it('holds every entry, and nothing that a spreadsheet would take for a formula', async () => {
    const w = await aWorkplace()
    const hostile = ['=HYPERLINK("http://x")', '+1+cmd', '-2+3', '@SUM(A1)', '\t=1', 'plain, with "quotes"\nand a line']
    for (const name of hostile) await w.orm.em.fork().transactional((em) => appendEntry(em, { at: w.services.now(), person: { id: 7, name }, act: name, details: { name } }))
    const { text, headers } = await (await w.as('observer')).get('/api/ledger/export.csv').expect(200)
    expect(headers).toMatchObject({ 'content-type': 'text/csv; charset=utf-8', 'content-disposition': expect.stringContaining('detent-ledger-2026-03-02.csv') })
    const [head, ...rows] = parse(text) as string[][]
    expect(head).toEqual(['sequence', 'at', 'person', 'act', 'machine', 'subject', 'details', 'previous hash', 'hash'])
    expect(rows).toHaveLength(6)
    for (const [i, row] of rows.entries()) {
      for (const cell of row) expect(cell).not.toMatch(/^[=@\t\r+-]/)
      expect(row[2].replaceAll("'", '')).toBe(hostile[i])
      expect(JSON.parse(row[6])).toEqual({ name: hostile[i] })
    }
  })
})
