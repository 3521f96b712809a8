import { beforeAll, describe, expect, it } from 'vitest'
import { Board } from '../../../server/modules/boards/board.entity.ts'
import { resolveJoint } from '../../../server/modules/checks/resolve-joint.ts'
import { expectParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import { aDraft, aWalker, hingeSchema, read, submitted, through, twoKnees, type Walker } from '../../support/a-walker.ts'
import { lastEntries } from '../../support/ledger.ts'
import { asBytes, nameOf, shaOf } from './downloads.ts'

const boards = { l1: twoKnees().joints['l1-knee'].board!, r1: twoKnees().joints['r1-knee'].board! }
const wish = (key: string, { joint = 'l1-knee', board = boards.l1, format = 'bin' } = {}) => `/api/changes/${key}/bench-image?joint=${joint}&board=${board}&format=${format}`

describe('a bench image of an unreleased change', () => {
  let w: Walker
  let key: string
  beforeAll(async () => {
    w = await aWalker()
    key = await aDraft(w)
  })

  it('is the image of the draft with release number 0, marked in name and header', async () => {
    const taken = await asBytes(w.engineer.get(wish(key))).expect(200)
    const bytes = taken.body as Buffer
    const schema = expectParameterSchema(hingeSchema())
    const resolved = resolveJoint(twoKnees(), 'l1-knee', new Map([['hinge 2.1.0', schema]]), 0)
    expect(resolved.kind === 'resolved' && bytes.equals(resolved.encoded.image)).toBe(true)
    // the release register of hinge 2.1.0 is a little-endian u32 at address 12
    expect(bytes.readUInt32LE(12)).toBe(0)
    expect(nameOf(taken.headers)).toBe(`UNRELEASED-bench-only_dunlin_l1-knee_${boards.l1}.bin`)
    expect(taken.headers).toMatchObject({ 'x-detent-mark': 'UNRELEASED; bench only', 'x-detent-sha256': shaOf(bytes) })
    const header = (await asBytes(w.engineer.get(wish(key, { format: 'h' }))).expect(200)).body as Buffer
    expect(header.toString()).toContain(`UNRELEASED – bench only, board ${boards.l1}`)
    expect(header.toString().split('\n')[0]).toContain('UNRELEASED')
  })

  it('is told in the ledger, and leaves the board with a bench set', async () => {
    const { headers } = await asBytes(w.engineer.get(wish(key, { board: boards.r1, joint: 'r1-knee' }))).expect(200)
    const entries = await lastEntries(w, 2)
    expect(entries.map((e) => e.act)).toEqual(['bench set on board', 'bench image taken'])
    expect(entries.find((e) => e.act === 'bench image taken')).toMatchObject({ personName: w.engineer.me.name, subject: { machine: 'dunlin', change: key, joint: 'r1-knee', board: boards.r1 }, details: { format: 'bin', sha256: headers['x-detent-sha256'] } })
    const board = await w.orm.em.fork().findOneOrFail(Board, { serial: boards.r1 }, { populate: ['joint'] })
    expect(board).toMatchObject({ benchSet: key, joint: { key: 'r1-knee' } })
  })

  it('is for those who write in the change alone; the attempt is recorded', async () => {
    for (const person of [w.other]) {
      const refused = await person.get(wish(key)).expect(403)
      expect(refused.body).toMatchObject({ type: '/problems/not-permitted' })
      expect(await lastEntries(w)).toMatchObject([{ act: 'refused', personName: person.me.name, details: { asked: 'take a bench image of a change' } }])
    }
    for (const person of [w.builder, w.manager, w.reviewer, w.observer]) await person.get(wish(key)).expect(403)
  })

  it('wants one board by its serial number, a joint of the change and a form that there is', async () => {
    for (const [bad, pointer] of [[{ board: '' }, '/board'], [{ board: 'H%200301' }, '/board'], [{ joint: 'l9-knee' }, '/joint'], [{ format: 'exe' }, '/format']] as const) {
      const refused = await w.engineer.get(wish(key, bad)).expect(400)
      expect(refused.body).toMatchObject({ type: '/problems/invalid-request', errors: [{ pointer }] })
    }
  })

  it('is refused while the check blocks, and names what does', async () => {
    const { values } = (await read(w.engineer, key)).set.families.knee
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/r1-knee/address', from: 0x3b, to: 0x33 }] }).expect(200)
    const before = await lastEntries(w)
    const refused = await w.engineer.get(wish(key)).expect(422)
    expect(refused.body).toMatchObject({ type: '/problems/check-blocks', detail: expect.stringContaining('0x33') })
    expect(await lastEntries(w)).toEqual(before)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/r1-knee/address', from: 0x33, to: 0x3b }] }).expect(200)
    expect(values.velocityGain).toBe(3.2)
    await asBytes(w.engineer.get(wish(key))).expect(200)
  })

  it('is refused for another board than the one whose values the draft holds', async () => {
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/l1-knee/board', from: boards.l1, to: 'H-0777' }] }).expect(200)
    const refused = await w.engineer.get(wish(key)).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/wrong-state', errors: [{ pointer: '/board' }], detail: expect.stringContaining('H-0777') })
    await asBytes(w.engineer.get(wish(key, { board: 'H-0777' }))).expect(200)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/l1-knee/board', from: 'H-0777', to: boards.l1 }] }).expect(200)
  })

  it('is still to be had of a submitted change, and no more of a released or cancelled one', async () => {
    await submitted(w, key)
    await asBytes(w.engineer.get(wish(key))).expect(200)
    const view = await read(w.reviewer, key)
    await w.reviewer.post(`/api/changes/${key}/return`, { reason: 'One more look.' }).set('If-Match', `"${view.revision}"`).expect(200)
    await through(w, key)
    expect((await w.engineer.get(wish(key)).expect(409)).body).toMatchObject({ type: '/problems/wrong-state', detail: expect.stringContaining('released') })
  })
})
