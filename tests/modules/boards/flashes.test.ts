import { describe, expect, it } from 'vitest'
import { BoardEvent } from '../../../server/modules/boards/board-event.entity.ts'
import { Board } from '../../../server/modules/boards/board.entity.ts'
import { Machine } from '../../../server/modules/machines/machine.entity.ts'
import type { BoardList, BoardView, MachineBoards } from '../../../shared/contract/boards.ts'
import { lastEntries } from '../../support/ledger.ts'
import { aRelease } from '../../support/a-release.ts'
import { aBench, eventsOf, flash, kneesWith, l1, r1, readBoard, withdraw } from './a-bench.ts'

const countOf = async (w: Awaited<ReturnType<typeof aBench>>) => ({ boards: await w.orm.em.fork().count(Board), events: await w.orm.em.fork().count(BoardEvent) })

describe('recording a flash', () => {
  it('puts a new board on record at its joint, with what it holds', async () => {
    const w = await aBench()
    const board = (await flash(w.builder, { serial: l1 }).expect(201)).body as BoardView
    expect(board).toMatchObject({ serial: l1, machine: 'dunlin', joint: { key: 'l1-knee', name: 'L1 knee', bus: 'fore', address: 0x33 }, firmware: 'hinge 2.1.0', release: '1.1.0', known: 'recorded', state: 'current', retired: false, knownBy: w.builder.me.name })
    expect(board.events).toMatchObject([{ kind: 'flash recorded', release: '1.1.0', joint: { key: 'l1-knee' }, person: w.builder.me.name, benchKey: null, readBack: null }])
    expect(await lastEntries(w)).toEqual([{ act: 'flash recorded', personName: w.builder.me.name, subject: { machine: 'dunlin', board: l1, joint: 'l1-knee', release: '1.1.0' }, details: { firmware: 'hinge 2.1.0', readBack: 'none' } }])
    expect(await readBoard(w.observer, l1)).toMatchObject({ state: 'current', may: { record: { allowed: false }, retire: { allowed: false } } })
  })

  it('records an older and a withdrawn release as what they are', async () => {
    const w = await aBench()
    expect((await flash(w.builder, { serial: l1, release: '1.0.0' }).expect(201)).body).toMatchObject({ state: 'outdated', release: '1.0.0' })
    await aRelease(w, { version: '1.2.0', set: kneesWith(3.6), withdrawn: 'Hums at 41 Hz.' })
    expect((await flash(w.builder, { serial: l1, release: '1.2.0' }).expect(201)).body).toMatchObject({ state: 'withdrawn release on board' })
    // the newest being withdrawn, the older one is not current again
    expect((await flash(w.builder, { serial: l1, release: '1.1.0' }).expect(201)).body).toMatchObject({ state: 'outdated' })
  })

  it('moves a board that sat elsewhere, and puts off the one that sat there; both keep their history', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    await flash(w.builder, { serial: r1, joint: 'r1-knee' }).expect(201)
    const moved = (await flash(w.builder, { serial: l1, joint: 'r1-knee' }).expect(201)).body as BoardView
    expect(moved).toMatchObject({ joint: { key: 'r1-knee' }, state: 'not calibrated for this joint' })
    expect(moved.events.map((e) => [e.kind, e.joint?.key ?? null, e.from])).toEqual([['flash recorded', 'r1-knee', null], ['moved', 'r1-knee', 'L1 knee'], ['flash recorded', 'l1-knee', null]])
    const off = await readBoard(w.builder, r1)
    expect(off).toMatchObject({ joint: null, release: '1.1.0' })
    expect(off.events[0]).toMatchObject({ kind: 'moved', joint: null, from: 'R1 knee', note: `replaced by ${l1}` })
    expect((await lastEntries(w, 3)).map((e) => e.act)).toEqual(['flash recorded', 'board moved', 'board moved'])
    const { joints, off: offList, counts } = (await w.builder.get('/api/machines/dunlin/boards').expect(200)).body as MachineBoards
    expect(joints.map((j) => [j.joint, j.board?.serial ?? null, j.state])).toEqual([['l1-knee', null, 'unknown'], ['r1-knee', l1, 'not calibrated for this joint']])
    expect(offList.map((b) => b.serial)).toEqual([r1])
    expect(counts).toMatchObject({ unknown: 1, 'not calibrated for this joint': 1, current: 0 })
  })

  it('takes the serial number as a scanner types it, in either case', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    expect((await flash(w.builder, { serial: l1.toLowerCase() }).expect(201)).body).toMatchObject({ serial: l1 })
    expect(await countOf(w)).toEqual({ boards: 1, events: 2 })
  })

  it('is done once for a repeated request', async () => {
    const w = await aBench()
    for (let i = 0; i < 2; i += 1) await flash(w.builder, { serial: l1 }).set('Idempotency-Key', 'flash-0000001').expect(201)
    expect(await countOf(w)).toEqual({ boards: 1, events: 1 })
  })

  it.each([
    ['an unknown joint', { joint: 'l9-knee' }, '/joint'],
    ['an unknown release', { release: '9.9.9' }, '/release'],
    ['a serial number that is none', { serial: '=H-0270' }, '/serial'],
  ])('refuses %s with its place, and records nothing', async (_name, edit, pointer) => {
    const w = await aBench()
    const { body } = await flash(w.builder, { serial: l1, ...edit }).expect(400)
    expect((body as { errors: { pointer: string }[] }).errors.map((e) => e.pointer)).toEqual([pointer])
    expect((body as { detail: string }).detail).toMatch(/Nothing was (recorded|saved)/)
    expect(await countOf(w)).toEqual({ boards: 0, events: 0 })
  })

  it('refuses who may not, and records the attempt', async () => {
    const w = await aBench()
    expect((await flash(w.observer, { serial: l1 }).expect(403)).body.detail).toMatch(/takes the role controls engineer, release manager or builder on dunlin/)
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'refused', details: { asked: 'record a flash', refusal: 'not-permitted' } })
    expect(await countOf(w)).toEqual({ boards: 0, events: 0 })
  })

  it('leaves a board alone that is on record where the builder may not record', async () => {
    const w = await aBench()
    await w.other.post('/api/machines/teasel/boards', { serial: l1, joint: null }).expect(201)
    const { body } = await flash(w.builder, { serial: l1 }).expect(403)
    expect(body.detail).toMatch(/on record elsewhere/)
    expect(body.detail).not.toMatch(/teasel/i)
    expect(await readBoard(w.other, l1)).toMatchObject({ machine: 'teasel' })
    await w.builder.get(`/api/boards/${l1}`).expect(404)
    // who may record on both moves it
    expect((await flash(w.other, { serial: l1 }).expect(201)).body).toMatchObject({ machine: 'dunlin' })
  })

  it('refuses a retired machine', async () => {
    const w = await aBench()
    const em = w.orm.em.fork()
    await em.nativeUpdate(Machine, { key: 'dunlin' }, { retiredAt: w.services.now() })
    expect((await flash(w.builder, { serial: l1 }).expect(409)).body.detail).toBe('Dunlin is retired. Nothing was recorded.')
  })
})

describe('recording a whole machine', () => {
  it('records a flash for each joint, each with its entry', async () => {
    const w = await aBench()
    const boards = [{ joint: 'l1-knee', serial: l1 }, { joint: 'r1-knee', serial: r1 }]
    const view = (await w.builder.post('/api/machines/dunlin/flashes/bulk', { release: '1.1.0', boards }).expect(201)).body as MachineBoards
    expect(view.counts.current).toBe(2)
    expect((await lastEntries(w, 2)).map((e) => [e.act, e.subject.board])).toEqual([['flash recorded', r1], ['flash recorded', l1]])
  })

  it('swaps two boards in one go', async () => {
    const w = await aBench()
    const record = (a: string, b: string) => w.builder.post('/api/machines/dunlin/flashes/bulk', { release: '1.1.0', boards: [{ joint: 'l1-knee', serial: a }, { joint: 'r1-knee', serial: b }] }).expect(201)
    await record(l1, r1)
    const { joints } = (await record(r1, l1)).body as MachineBoards
    expect(joints.map((j) => j.board?.serial)).toEqual([r1, l1])
  })

  it.each([
    ['a serial number that stands twice', [['l1-knee', l1], ['r1-knee', l1.toLowerCase()]], '/boards/1/serial'],
    ['a joint that stands twice', [['l1-knee', l1], ['l1-knee', r1]], '/boards/1/joint'],
    ['a joint that is none', [['l1-knee', l1], ['l9-knee', r1]], '/boards/1/joint'],
  ])('refuses %s, and records none of the others', async (_name, pairs, pointer) => {
    const w = await aBench()
    const { body } = await w.builder.post('/api/machines/dunlin/flashes/bulk', { release: '1.1.0', boards: pairs.map(([joint, serial]) => ({ joint, serial })) }).expect(400)
    expect((body as { errors: { pointer: string }[] }).errors.map((e) => e.pointer)).toEqual([pointer])
    expect(await countOf(w)).toEqual({ boards: 0, events: 0 })
  })
})

describe('recording where a board sits', () => {
  it('adds a board, moves it, and takes it off', async () => {
    const w = await aBench()
    const seat = (joint: string | null, note?: string) => w.builder.post('/api/machines/dunlin/boards', { serial: 'H-0999', joint, ...(note ? { note } : {}) })
    expect((await seat('l1-knee', 'spare from the drawer').expect(201)).body).toMatchObject({ state: 'not calibrated for this joint', joint: { key: 'l1-knee' } })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'board added', subject: { board: 'H-0999', joint: 'l1-knee' }, details: { note: 'spare from the drawer' } })
    await seat('r1-knee').expect(201)
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'board moved', subject: { joint: 'r1-knee' }, details: { from: 'l1-knee' } })
    expect((await seat(null).expect(201)).body).toMatchObject({ joint: null, state: 'unknown' })
    expect((await seat(null).expect(409)).body.detail).toMatch(/off its joint already/)
    expect((await eventsOf(w)).map((e) => e.kind)).toEqual(['added', 'moved', 'moved'])
  })
})

describe('retiring a board', () => {
  it('takes it off for good; its history stays', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    expect((await w.builder.post(`/api/boards/${l1}/retire`, { serial: 'H-0001', reason: 'Burnt.' }).expect(400)).body.errors).toEqual([{ pointer: '/serial', detail: `is not ${l1}` }])
    const retired = (await w.builder.post(`/api/boards/${l1}/retire`, { serial: l1, reason: 'Burnt driver.' }).expect(200)).body as BoardView
    expect(retired).toMatchObject({ retired: true, joint: null, may: { record: { allowed: false, why: `Board ${l1} is retired.` } } })
    expect((await lastEntries(w))[0]).toMatchObject({ act: 'board retired', subject: { board: l1 }, details: { from: 'l1-knee', note: 'Burnt driver.' } })
    expect((await flash(w.builder, { serial: l1 }).expect(409)).body.detail).toMatch(/is retired; it can't be/)
    expect((await w.builder.post('/api/machines/dunlin/boards', { serial: l1, joint: 'l1-knee' }).expect(409)).body.detail).toMatch(/is retired/)
    await w.builder.post(`/api/boards/${l1}/retire`, { serial: l1, reason: 'Again.' }).expect(409)
    const list = async (query: string) => ((await w.builder.get(`/api/boards${query}`).expect(200)).body as BoardList).boards.map((b) => b.serial)
    expect(await list('')).toEqual([])
    expect(await list('?retired=yes')).toEqual([l1])
  })
})

describe('the history of a board', () => {
  it('is written once', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    const em = w.orm.em.fork()
    const event = await em.findOneOrFail(BoardEvent, { id: { $gt: 0 } })
    event.note = 'another'
    await expect(em.flush()).rejects.toThrow(/written once/)
    await expect(w.orm.em.fork().getConnection().execute('update board_event set note = ?', ['another'])).rejects.toThrow(/written once/)
    await expect(w.orm.em.fork().getConnection().execute('delete from board_event')).rejects.toThrow(/written once/)
  })
})

describe('reading boards', () => {
  it('shows those of the machines that the reader may read', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    await w.other.post('/api/machines/teasel/boards', { serial: 'H-0401', joint: null }).expect(201)
    const list = (await w.other.get('/api/boards').expect(200)).body as BoardList
    expect(list.boards.map((b) => b.serial)).toEqual([l1, 'H-0401'])
    expect(list.mayRecordOn).toEqual(['dunlin', 'teasel'])
    const mine = (await w.builder.get('/api/boards').expect(200)).body as BoardList
    expect(mine).toMatchObject({ boards: [{ serial: l1 }], mayRecordOn: ['dunlin'] })
    expect(((await w.other.get('/api/boards?machine=teasel').expect(200)).body as BoardList).boards.map((b) => b.serial)).toEqual(['H-0401'])
    expect(((await w.other.get('/api/boards?release=1.1.0').expect(200)).body as BoardList).boards.map((b) => b.serial)).toEqual([l1])
  })

  it('lists what waits at the bench, withdrawn releases first', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: r1, joint: 'r1-knee', release: '1.0.0' }).expect(201)
    const tasks = async () => (await w.builder.get('/api/bench-tasks').expect(200)).body as { joint: string; state: string; flash: string | null; serial: string | null }[]
    expect((await tasks()).map((t) => [t.joint, t.state, t.flash, t.serial])).toEqual([['r1-knee', 'outdated', '1.1.0', r1], ['l1-knee', 'unknown', '1.1.0', null]])
    await withdraw(w, '1.0.0')
    await flash(w.builder, { serial: l1, release: '1.0.0' }).expect(201)
    expect((await tasks()).map((t) => t.state)).toEqual(['withdrawn release on board', 'withdrawn release on board'])
    expect((await w.observer.get('/api/bench-tasks').expect(200)).body).toEqual([])
  })
})
