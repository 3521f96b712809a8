import { describe, expect, it } from 'vitest'
import { boardBindingProblem } from '../../../server/modules/boards/board-binding.ts'
import { Release } from '../../../server/modules/releases/release.entity.ts'
import type { BenchCard } from '../../../shared/contract/boards.ts'
import { aRelease } from '../../support/a-release.ts'
import { aBench, fileOf, flash, kneesWith, l1, readBoard } from './a-bench.ts'

const image = (version: string, board?: string) => `/api/machines/dunlin/releases/${version}/joints/l1-knee/image.hex?reason=tried+in+a+test${board ? `&board=${board}` : ''}`

describe('board-bound values', () => {
  it('belong to the board they were measured on: after a swap the joint\'s downloads are refused until values of the new board are released', async () => {
    const w = await aBench()
    await w.builder.get(image('1.1.0')).expect(200)
    await flash(w.builder, { serial: l1 }).expect(201)
    await w.builder.get(image('1.1.0')).expect(200)

    // the swap
    await w.builder.post('/api/machines/dunlin/boards', { serial: 'H-0901', joint: 'l1-knee' }).expect(201)
    const { body } = await w.builder.get(image('1.1.0')).expect(409)
    expect((body as { detail: string }).detail).toBe(`L1 knee of 1.1.0 holds values that were measured on board ${l1}, but H-0901 is recorded there. Measure them on H-0901 and release them first; if ${l1} sits there after all, record that. Nothing was downloaded.`)
    await w.builder.get(image('1.0.0')).expect(409)
    await w.builder.get('/api/machines/dunlin/releases/1.1.0/joints/r1-knee/image.hex').expect(200)
    expect(await readBoard(w.builder, 'H-0901')).toMatchObject({ state: 'not calibrated for this joint' })

    // values measured on it are released
    await aRelease(w, { version: '1.2.0', set: kneesWith(3.4, { l1: 'H-0901' }) })
    await w.builder.get(image('1.2.0')).expect(200)
    await w.builder.get(image('1.1.0')).expect(409)
    expect((await flash(w.builder, { serial: 'H-0901', release: '1.2.0' }).expect(201)).body).toMatchObject({ state: 'current' })
  })

  it('are refused for another board in the builder\'s hand, before anything is recorded', async () => {
    const w = await aBench()
    expect((await w.builder.get(image('1.1.0', 'H-0901')).expect(409)).body.detail).toMatch(/but this is H-0901/)
    await w.builder.get(image('1.1.0', l1.toLowerCase())).expect(200)
  })

  it('stay for the board itself when it comes back', async () => {
    const w = await aBench()
    await flash(w.builder, { serial: l1 }).expect(201)
    await w.builder.post('/api/machines/dunlin/boards', { serial: 'H-0901', joint: 'l1-knee' }).expect(201)
    await w.builder.post('/api/machines/dunlin/boards', { serial: l1, joint: 'l1-knee' }).expect(201)
    await w.builder.get(image('1.1.0')).expect(200)
    expect(await readBoard(w.builder, l1)).toMatchObject({ state: 'current' })
  })

  it('do not keep a withdrawn release from its analysis', async () => {
    const w = await aBench()
    await aRelease(w, { version: '1.2.0', set: kneesWith(3.6), withdrawn: 'Hums.' })
    await w.builder.post('/api/machines/dunlin/boards', { serial: 'H-0901', joint: 'l1-knee' }).expect(201)
    expect((await fileOf(w.manager, '1.2.0', 'l1-knee')).length).toBe(128)
  })

  it('bind nothing where a release names no board', async () => {
    const w = await aBench()
    const set = kneesWith(3.5)
    delete set.joints['l1-knee'].board
    await aRelease(w, { version: '1.2.0', set })
    await w.builder.post('/api/machines/dunlin/boards', { serial: 'H-0901', joint: 'l1-knee' }).expect(201)
    await w.builder.get(image('1.2.0')).expect(200)
    const em = w.orm.em.fork()
    expect(await boardBindingProblem(em, await em.findOneOrFail(Release, { version: '1.2.0' }), 'l1-knee')).toBeNull()
    expect(await boardBindingProblem(em, await em.findOneOrFail(Release, { version: '1.2.0' }), 'no-such-joint')).toBeNull()
  })
})

describe('the bench card', () => {
  const card = (version: string, joint = 'l1-knee') => `/api/machines/dunlin/releases/${version}/joints/${joint}/card`

  it('holds every written register with units and bytes, the checksums, and where the release is', async () => {
    const w = await aBench()
    const bytes = await fileOf(w.builder, '1.1.0', 'l1-knee')
    const { body } = await w.observer.get(card('1.1.0')).expect(200)
    const view = body as BenchCard
    expect(view).toMatchObject({ machineName: 'Dunlin', version: '1.1.0', state: 'current', name: 'L1 knee', bus: 'fore', address: 0x33, revision: 2, firmware: 'hinge 2.1.0', calibratedFor: l1, imageBytes: 128, board: null, binding: null, releaseUrl: `${w.services.config.baseUrl}/machines/dunlin/releases/1.1.0`, may: { download: { allowed: false }, record: { allowed: false } } })
    const gain = view.rows.find((r) => r.parameter === 'velocityGain')!
    expect(gain).toMatchObject({ title: 'Velocity gain', unit: 'A·s/rad' })
    expect(gain.value).toBe(3.4)
    for (const row of view.rows) expect(bytes.subarray(row.address, row.address + row.bytes.split(' ').length).toString('hex').toUpperCase(), row.title).toBe(row.bytes.replaceAll(' ', ''))
    expect(view.checksum).toEqual({ algorithm: 'CRC-16/IBM-3740', value: bytes.readUInt16LE(126).toString(16).toUpperCase().padStart(4, '0'), address: 126 })
    expect(view.head.replaceAll(' ', '').toLowerCase()).toBe(bytes.subarray(0, 5).toString('hex'))
  })

  it('says when its joint has another board, and which board sits there', async () => {
    const w = await aBench()
    await w.builder.post('/api/machines/dunlin/boards', { serial: 'H-0901', joint: 'l1-knee' }).expect(201)
    const { body } = await w.builder.get(card('1.1.0')).expect(200)
    expect(body).toMatchObject({ board: { serial: 'H-0901', state: 'not calibrated for this joint' }, binding: expect.stringContaining('H-0901 is recorded there') as string, may: { download: { allowed: true }, record: { allowed: true } } })
  })

  it('is not there for a joint that is none', async () => {
    const w = await aBench()
    await w.builder.get(card('1.1.0', 'l9-knee')).expect(404)
    await w.builder.get(card('9.9.9')).expect(404)
  })
})
