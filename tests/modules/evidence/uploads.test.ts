import { createHash } from 'node:crypto'
import { existsSync } from 'node:fs'
import { gunzipSync } from 'node:zlib'
import { beforeAll, describe, expect, it } from 'vitest'
import type { EvidenceSummary, EvidenceView, LogWindow } from '../../../shared/contract/evidence.ts'
import { placeIn } from '../../../server/db/file-store.ts'
import { listStored } from '../../../server/db/stored-files.ts'
import { aDraft, aWalker, through, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aReadLog, kneeLog, readIt, sendLog } from './a-log.ts'

const atJoint = '/api/machines/dunlin/joints/l1-knee/evidence'
const sha256 = (bytes: Uint8Array | string) => createHash('sha256').update(bytes).digest('hex')

describe('bench logs of a joint', () => {
  let w: Walker
  beforeAll(async () => {
    w = await aWalker()
    await through(w, await aDraft(w))
  })

  it('stores what was sent, gzipped under its hash, and notes it in the ledger', async () => {
    const text = kneeLog()
    const view = (await sendLog(w.engineer, atJoint, text, 'l1 knee.csv').expect(201)).body as EvidenceView
    expect(view).toMatchObject({ number: 1, machine: 'dunlin', joint: 'l1-knee', change: null, name: 'l1 knee.csv', state: 'received', sha256: sha256(text), bytes: text.length, reading: null, mappingFrom: null })
    expect(view.storedBytes).toBeLessThan(text.length / 2)
    const file = await w.engineer.get('/api/machines/dunlin/evidence/1/file').buffer().parse((res, done) => {
      const chunks: Buffer[] = []
      res.on('data', (c: Buffer) => chunks.push(c))
      res.on('end', () => done(null, Buffer.concat(chunks)))
    })
    expect(sha256(file.body as Buffer)).toBe(view.storedSha256)
    expect(gunzipSync(file.body as Buffer).toString()).toBe(text)
    const [entry] = await lastEntries(w)
    expect(entry).toMatchObject({ act: 'evidence uploaded', subject: { machine: 'dunlin', joint: 'l1-knee' }, details: { evidence: 1, name: 'l1 knee.csv', sha256: sha256(text), storedSha256: view.storedSha256 } })
  })

  it('proposes columns and units from the names, reads them to SI, and notes that too', async () => {
    const sent = (await w.engineer.get('/api/machines/dunlin/evidence/1')).body as EvidenceView
    expect(sent.mapping.map((m) => `${m.signal} ${m.unit}`)).toEqual(['time ms', 'set-point deg', 'position deg', 'speed rpm', 'current mA', 'voltage V'])
    const view = await readIt(w, w.engineer, sent)
    expect(view).toMatchObject({ state: 'read', reading: { stretches: 1, repairs: [] }, may: { read: { allowed: false } } })
    expect(view.reading!.rows).toBe(kneeLog().split('\n').length - 2)
    expect(view.reading!.rate).toBeCloseTo(2000, 3)
    const series = (await w.observer.get('/api/machines/dunlin/evidence/1/series').expect(200)).body as LogWindow
    const position = series.series.find((s) => s.signal === 'position')!
    expect(position.unit).toBe('rad')
    // the set-points reach 0.525 rad, 30.08 degrees
    expect(Math.max(...position.drawn.y.map((v) => v ?? 0))).toBeGreaterThan(0.5)
    expect(Math.max(...position.drawn.y.map((v) => v ?? 0))).toBeLessThan(0.7)
    const [entry] = await lastEntries(w)
    expect(entry).toMatchObject({ act: 'evidence read', details: { evidence: 1, rows: view.reading!.rows, columns: { time: 'time in ms', current: 'current in mA' } } })
    expect(existsSync(placeIn(w.services.files.directory, (entry.details as { columnsSha256: string }).columnsSha256))).toBe(true)
  })

  it('draws a stretch of it closer, with every row', async () => {
    const series = (await w.observer.get('/api/machines/dunlin/evidence/1/series?from=0.1&to=0.2&pieces=700').expect(200)).body as LogWindow
    expect(series.rowsPerPoint).toBe(1)
    expect(series.from).toBeGreaterThanOrEqual(0.0995)
    expect(series.to).toBeLessThanOrEqual(0.2005)
    expect((await w.observer.get('/api/machines/dunlin/evidence/1/series?from=soon').expect(400)).body.detail).toContain('"soon" is none')
  })

  it('remembers columns and units for the next log of the machine, by the names of its columns', async () => {
    const plain = kneeLog().replace('time [ms],set-point [deg],position [deg],speed [rpm],current [mA],voltage [V]', 'a,b,c,d,e,f')
    const first = (await sendLog(w.engineer, atJoint, plain, 'first.csv').expect(201)).body as EvidenceView
    expect(first.mapping).toEqual([])
    await readIt(w, w.engineer, first, (['time ms', 'set-point deg', 'position deg', 'speed rpm', 'current mA', 'voltage V'] as const).map((text, column) => ({ signal: text.split(' ')[0] as 'time', unit: text.split(' ')[1], column })))
    const swapped = plain.split('\n').map((l) => l.split(',').reverse().join(',')).join('\n')
    const second = (await sendLog(w.other, '/api/machines/dunlin/joints/r1-knee/evidence', swapped, 'second.csv').expect(201)).body as EvidenceView
    expect(second.mappingFrom).toBe(first.number)
    expect(second.mapping.map((m) => [m.signal, m.column, m.unit])).toEqual([['time', 5, 'ms'], ['set-point', 4, 'deg'], ['position', 3, 'deg'], ['speed', 2, 'rpm'], ['current', 1, 'mA'], ['voltage', 0, 'V']])
    expect((await readIt(w, w.other, second)).state).toBe('read')
  })

  it('lists the logs of a joint, newest first', async () => {
    const list = (await w.observer.get('/api/machines/dunlin/evidence?joint=l1-knee').expect(200)).body as EvidenceSummary[]
    expect(list.map((e) => e.name)).toEqual(['first.csv', 'l1 knee.csv'])
  })

  it('is taken away by who uploaded it alone; its file stays, and the ledger says so', async () => {
    const log = await aReadLog(w, w.engineer, atJoint, kneeLog(), 'wrong run.csv')
    expect((await w.other.post(`/api/machines/dunlin/evidence/${log.number}/remove`).expect(409)).body.detail).toContain('nobody else takes it away')
    const gone = (await w.engineer.post(`/api/machines/dunlin/evidence/${log.number}/remove`).expect(200)).body as EvidenceView
    expect(gone).toMatchObject({ state: 'removed', removedBy: w.engineer.me.name, may: { remove: { allowed: false } } })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'evidence removed', details: { evidence: log.number, sha256: log.sha256 } })
    expect(((await w.observer.get('/api/machines/dunlin/evidence')).body as EvidenceSummary[]).some((e) => e.number === log.number)).toBe(false)
    expect((await w.observer.get(`/api/machines/dunlin/evidence/${log.number}/series`).expect(409)).body.detail).toContain('was removed')
    await w.engineer.post(`/api/machines/dunlin/evidence/${log.number}/remove`).expect(409)
  })

  it('is uploaded by controls engineers alone, and the refusal is recorded', async () => {
    for (const person of [w.observer, w.builder, w.reviewer, w.manager]) await sendLog(person, atJoint, kneeLog()).expect(403)
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'refused', details: { asked: 'upload a bench log of a joint' } })
    const outside = await w.as([['controls engineer', null]])
    await sendLog(outside, '/api/machines/dunlin/joints/l9-knee/evidence', kneeLog()).expect(404)
  })

  const reading = async (text: string | Buffer, mapping?: EvidenceView['mapping']) => {
    const sent = (await sendLog(w.engineer, atJoint, text).expect(201)).body as EvidenceView
    return readIt(w, w.engineer, sent, mapping ?? sent.mapping)
  }
  const lines = kneeLog().trimEnd().split('\n')

  it('states gaps, repeated rows, jitter and rows left out', async () => {
    const cut = [...lines.slice(0, 400), ...lines.slice(520, 700), lines[699], ...lines.slice(700, 900), `${lines[900].split(',')[0]},broken,1,1,1,1`, ...lines.slice(901)]
    const { reading: found, state } = await reading(cut.join('\n'))
    expect(state).toBe('read')
    expect(found!.stretches).toBe(2)
    expect(found!.repairs.join(' ')).toMatch(/One row held no number.*1 rows repeated the time.*1 gaps of more than 3 rows/)
  })

  it('reads semicolons with decimal commas and a byte order mark', async () => {
    const text = `\uFEFF${lines.map((l, k) => (k === 0 ? l.replaceAll(',', ';') : l.replaceAll(',', ';').replaceAll('.', ','))).join('\r\n')}\r\n`
    const { reading: found, layout } = await reading(text)
    expect(layout).toMatchObject({ delimiter: ';', decimal: ',' })
    expect(found).toMatchObject({ rows: lines.length - 1, repairs: [] })
  })

  it('refuses a speed in another unit than said, at its unit, and keeps the log as it was sent', async () => {
    const sent = (await sendLog(w.engineer, atJoint, kneeLog()).expect(201)).body as EvidenceView
    const wrong = await readIt(w, w.engineer, sent, sent.mapping.map((m) => (m.signal === 'speed' ? { ...m, unit: 'rad/s' } : m)))
    expect(wrong).toMatchObject({ state: 'received', progress: { state: 'failed', errors: [{ pointer: '/mapping/3/unit' }] } })
    expect(wrong.progress.problem).toContain('revolutions per minute')
    expect((await readIt(w, w.engineer, sent)).state).toBe('read')
  })

  it('refuses times that run backwards, and milliseconds taken for seconds', async () => {
    const back = await reading([lines[0], ...lines.slice(300, 900), ...lines.slice(1, 300)].join('\n'))
    expect(back.progress.problem).toContain('Time runs backwards')
    const sent = (await sendLog(w.engineer, atJoint, kneeLog()).expect(201)).body as EvidenceView
    const seconds = await readIt(w, w.engineer, sent, sent.mapping.map((m) => (m.signal === 'time' ? { ...m, unit: 's' } : m)))
    expect(seconds.progress.problem).toContain('times in ms taken for s')
  })

  it('refuses columns that do not fit, each at its place', async () => {
    const sent = (await sendLog(w.engineer, atJoint, kneeLog()).expect(201)).body as EvidenceView
    const refusal = await w.engineer.post(`/api/machines/dunlin/evidence/${sent.number}/read`, { mapping: [{ signal: 'time', column: 0, unit: 'mA' }, { signal: 'speed', column: 99, unit: 'furlong' }, { signal: 'position', column: 0, unit: 'deg' }] }).expect(400)
    expect(refusal.body.errors.map((e: { pointer: string }) => e.pointer)).toEqual(['/mapping/0/unit', '/mapping/1/unit', '/mapping/1/column', '/mapping/2/column', '/mapping'])
    expect(refusal.body.errors[0].detail).toBe('mA is A; time is in s')
  })

  it.each([
    ['an empty file', Buffer.alloc(0), 400, /The file is empty/],
    ['a binary file', Buffer.from([0x7f, 0x45, 0x4c, 0x46, 0, 0, 1]), 415, /zero bytes/],
    ['prose', Buffer.from('It moved.\nThen it stopped.\n'), 415, /No row of numbers/],
  ])('takes no %s, and keeps nothing of it', async (_, bytes, status, words) => {
    const before = await listStored(w.services.files.directory)
    expect((await sendLog(w.engineer, atJoint, bytes).expect(status)).body.detail).toMatch(words)
    expect(await listStored(w.services.files.directory)).toEqual(before)
  })

  it('takes no more than 200 MB, and keeps nothing of what came before', async () => {
    const before = await listStored(w.services.files.directory)
    const row = `${'0.5,'.repeat(15)}0.5\n`
    const refusal = await sendLog(w.engineer, atJoint, Buffer.alloc(200_000_001, row), 'too-long.csv').expect(413)
    expect(refusal.body).toMatchObject({ type: '/problems/body-too-large', limit: 200_000_000 })
    expect(await listStored(w.services.files.directory)).toEqual(before)
  })

  it('says so when a stored log was altered, and hands nothing out', async () => {
    const log = await aReadLog(w, w.engineer, atJoint, kneeLog({ seed: 99 }), 'altered.csv')
    const { writeFile } = await import('node:fs/promises')
    await writeFile(placeIn(w.services.files.directory, log.storedSha256), 'other bytes')
    expect((await w.observer.get(`/api/machines/dunlin/evidence/${log.number}/file`).expect(500)).body.type).toBe('/problems/verification-failed')
  })
})
