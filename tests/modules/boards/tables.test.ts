import { describe, expect, it } from 'vitest'
import { exportBoards } from '../../../server/modules/boards/export-boards.ts'
import { readBoardTable } from '../../../server/modules/boards/read-board-table.ts'
import type { BoardSummary, BoardTablePreview } from '../../../shared/contract/boards.ts'
import type { DomainError } from '../../../server/http/errors.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aBench, eventsOf, flash, l1, r1, readBoard, type Bench } from './a-bench.ts'

const preview = async (w: Bench, text: string) => (await w.builder.post('/api/machines/dunlin/boards/preview', { text }).expect(200)).body as BoardTablePreview
const take = (w: Bench, text: string, decidedOn: string) => w.builder.post('/api/machines/dunlin/boards/import', { text, decidedOn })
const csv = async (w: Bench, query = '') => (await w.builder.get(`/api/boards.csv${query}`).expect(200)).text

describe('a table of boards', () => {
  it('is previewed row by row, and then imported', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: r1, joint: 'l1-knee', release: '1.0.0' }).expect(201)
    const text = `serial,joint,release,firmware\n${l1},l1-knee,1.1.0,\n${r1},r1-knee,1.0.0,hinge 2.1.0\nH-0777,,,hinge 2.0.0\n`
    const seen = await preview(w, text)
    expect(seen.rows.map((r) => [r.line, r.serial, r.does, r.problem])).toEqual([
      [2, l1, ['new, at L1 knee', `${r1} leaves L1 knee`, 'recorded as flashed with 1.1.0'], null],
      [3, r1, ['moves from L1 knee to R1 knee', 'recorded as flashed with 1.0.0'], null],
      [4, 'H-0777', ['new, at no joint', 'firmware hinge 2.0.0'], null],
    ])
    expect(seen).toMatchObject({ alters: 3, problems: 0 })
    expect((await eventsOf(w)).length).toBe(1)
    await take(w, text, seen.hash).expect(200)
    expect(await readBoard(w.builder, l1)).toMatchObject({ joint: { key: 'l1-knee' }, release: '1.1.0', known: 'recorded' })
    expect(await readBoard(w.builder, r1)).toMatchObject({ joint: { key: 'r1-knee' }, release: '1.0.0', state: 'outdated' })
    expect(await readBoard(w.builder, 'H-0777')).toMatchObject({ joint: null, firmware: 'hinge 2.0.0', state: 'unknown' })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'board added', subject: { board: 'H-0777' }, details: { note: 'imported', firmware: 'hinge 2.0.0' } })
  })

  it('that was exported alters nothing when it is imported again', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    await w.builder.post('/api/machines/dunlin/boards', { serial: r1, joint: null }).expect(201)
    const text = await csv(w, '?machine=dunlin')
    expect(text).toBe(`serial,machine,joint,firmware,release,known,state,recorded\n${l1},dunlin,l1-knee,hinge 2.1.0,1.1.0,recorded,current,2026-03-02T09:00:00.000Z\n${r1},dunlin,,,,,unknown,\n`)
    const seen = await preview(w, text)
    expect(seen).toMatchObject({ alters: 0, problems: 0 })
    const before = (await eventsOf(w)).length
    await take(w, text, seen.hash).expect(200)
    expect((await eventsOf(w)).length).toBe(before)
  })

  it.each([
    ['semicolons', 'serial;joint\nH-0001;l1-knee\n'],
    ['tabs', 'joint\tserial\nl1-knee\tH-0001\n'],
    ['a byte order mark, quotes and empty lines', '\ufeff"serial","joint"\r\n\r\n"H-0001"," l1-knee "\r\n'],
  ])('reads %s', (_name, text) => {
    expect(readBoardTable(text)).toMatchObject([{ serial: 'H-0001', joint: 'l1-knee', release: '', machine: '' }])
  })

  it.each([
    ['an unknown column', 'serial,colour\nH-1,red\n', 1, /"colour" is no column/],
    ['no column of serial numbers', 'joint\nl1-knee\n', 1, /"serial" is missing/],
    ['a column twice', 'serial,serial\nH-1,H-2\n', 1, /stands twice/],
    ['a row of another length', 'serial,joint\nH-1,l1-knee\nH-2\n', 3, /another number of columns/],
    ['a quote that is not closed', 'serial,joint\n"H-1,l1-knee\n', 2, /quote/],
    ['no row', 'serial,joint\n', 1, /no row/],
    ['too many rows', `serial\n${Array.from({ length: 5001 }, (_, i) => `H-${i}`).join('\n')}\n`, 5002, /at most 5000 rows/],
  ])('refuses %s by line', (_name, text, line, words) => {
    let error: DomainError | undefined
    try {
      readBoardTable(text)
    } catch (e) {
      error = e as DomainError
    }
    expect(error?.code).toBe('content-invalid')
    expect(error?.extra.line).toBe(line)
    expect(error?.message).toMatch(words)
  })

  it.each([
    ['a serial number that a spreadsheet would run', '=HYPERLINK("http://x"),l1-knee,,', /is no serial number/],
    ['an unknown joint', 'H-0001,l9-knee,,', /no joint "l9-knee"/],
    ['an unknown release', 'H-0001,l1-knee,9.9.9,', /no release "9\.9\.9"/],
    ['a flash without a joint', 'H-0001,,1.1.0,', /name the joint/],
    ['firmware that the release is not for', 'H-0001,l1-knee,1.1.0,hinge 2.0.0', /1\.1\.0 is for hinge 2\.1\.0/],
    ['firmware that is no name', 'H-0001,l1-knee,,Hinge', /no line and version/],
    ['a row of another machine', 'H-0001,l1-knee,,,teasel', /belongs to another machine/],
    ['other firmware on a board that stays as it is', `${l1},l1-knee,1.1.0,hinge 2.0.0`, /1\.1\.0 is for hinge 2\.1\.0/],
  ])('names what keeps a row out: %s', async (_name, row, words) => {
    const w = await aBench()
    const cells = row.startsWith('=') ? `"${row.slice(0, row.lastIndexOf(')') + 1).replaceAll('"', '""')}"${row.slice(row.lastIndexOf(')') + 1)},` : `${row}${row.split(',').length < 5 ? ',' : ''}`
    const text = `serial,joint,release,firmware,machine\n${r1},r1-knee,1.1.0,,\n${cells}\n`
    const seen = await preview(w, text)
    expect(seen.problems).toBe(1)
    expect(seen.rows[1].problem).toMatch(words)
    const { body } = await take(w, text, seen.hash).expect(422)
    expect((body as { errors: { detail: string }[] }).errors[0].detail).toMatch(/^line 3, /)
    expect(await eventsOf(w)).toEqual([])
  })

  it('names a serial number and a joint that stand twice', async () => {
    const w = await aBench()
    const { rows } = await preview(w, `serial,joint\n${l1},l1-knee\n${l1.toLowerCase()},r1-knee\n${r1},l1-knee\n`)
    expect(rows.map((r) => r.problem)).toEqual([null, 'stands in line 2 already', 'its joint has a board in line 2 already'])
  })

  it('is refused when something moved since the preview', async () => {
    const w = await aBench()
    const text = `serial,joint\n${l1},l1-knee\n`
    const { hash } = await preview(w, text)
    await flash(w.builder, { serial: l1 }).expect(201)
    expect((await take(w, text, hash).expect(412)).body.detail).toMatch(/since you looked at the preview/)
  })

  it('writes no cell that a spreadsheet would run, whatever a machine or person is called', () => {
    const row: BoardSummary = { serial: 'H-1', machine: 'dunlin', machineName: '=cmd()', joint: { key: 'l1-knee', name: '+1+1', bus: null, address: null }, firmware: 'hinge 2.1.0', release: '1.0.0', imageOf: null, known: 'recorded', knownAt: '2026-03-02T09:00:00.000Z', knownBy: '@sum', state: 'current', why: '=1', retired: false }
    for (const cell of exportBoards([row]).split(/[,\n]/)) expect(cell).not.toMatch(/^[=+@\t\r-]/)
  })

  it('is for those who may record flashes', async () => {
    const w = await aBench()
    await w.observer.post('/api/machines/dunlin/boards/preview', { text: 'serial\nH-1\n' }).expect(403)
    await w.observer.get('/api/boards.csv').expect(200)
  })
})
