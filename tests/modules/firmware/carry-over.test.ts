import { beforeAll, describe, expect, it } from 'vitest'
import type { ChangeView, DraftPointView } from '../../../shared/contract/changes.ts'
import type { CarryOverPreview, FirmwareComparisonView } from '../../../shared/contract/firmware.ts'
import { printSet } from '../../../shared/parameters/set-text.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { aDraft, aWalker, hingeSchema, read, submitted, twoKnees, type Walker } from '../../support/a-walker.ts'

/** A draft of two knees on hinge 2.0.0. */
async function onTheOld(w: Walker): Promise<string> {
  const set = twoKnees()
  set.families.knee.values = { velocityGain: 3.2, watchdog: 300, speedLimit: 60 }
  for (const joint of Object.values(set.joints)) Object.assign(joint, { firmware: 'hinge 2.0.0', values: {} })
  return aDraft(w, set)
}

describe('carrying a set over inside a change', () => {
  let w: Walker
  let key: string
  const at = (query: string) => `/api/changes/${key}/carry-over?${query}`
  const preview = async (query: string) => (await w.engineer.get(at(query)).expect(200)).body as CarryOverPreview
  beforeAll(async () => {
    w = await aWalker()
    await aFirmware(w, { version: '2.0.0', schema: hingeSchema('2.0.0') })
    await aFirmware(w, { version: '2.2.0', schema: { ...hingeSchema(), 'x-carry': undefined }, state: 'draft' })
    await aFirmware(w, { version: '1.9.0', schema: hingeSchema('2.0.0'), state: 'retired' })
    key = await onTheOld(w)
  })

  it('is shown before anybody accepts it, and alters nothing', async () => {
    const before = await read(w.engineer, key)
    const shown = await preview('to=hinge%202.1.0&family=knee')
    expect(shown).toMatchObject({ to: 'hinge 2.1.0', joints: [{ joint: 'l1-knee', from: 'hinge 2.0.0' }, { joint: 'r1-knee', from: 'hinge 2.0.0' }], problems: [], seen: expect.stringMatching(/^[0-9a-f]{64}$/) })
    expect(shown.rows.map((r) => [r.from, r.to, r.kind])).toEqual([['velocityGain', 'velocityGain', 'kept'], ['watchdog', 'busWatchdog', 'renamed'], ['speedLimit', 'speedLimit', 'converted']])
    expect(await read(w.engineer, key)).toEqual(before)
    expect((await w.observer.get(at('to=hinge%202.1.0&joints=l1-knee')).expect(200)).body).toMatchObject({ joints: [{ joint: 'l1-knee' }] })
  })

  it.each<[string, string, number, string]>([
    ['a version that is not there', 'to=hinge%209.9.9&family=knee', 400, '/to'],
    ['a text that is no version', 'to=hinge&family=knee', 400, '/to'],
    ['a retired version', 'to=hinge%201.9.0&family=knee', 409, '/to'],
    ['a version without rules', 'to=hinge%202.2.0&family=knee', 422, '/to'],
    ['neither joints nor family', 'to=hinge%202.1.0', 400, '/joints'],
    ['both', 'to=hinge%202.1.0&family=knee&joints=l1-knee', 400, '/joints'],
    ['a joint that is not there', 'to=hinge%202.1.0&joints=l1-knee,l9-knee', 400, '/joints'],
    ['a family that is not there', 'to=hinge%202.1.0&family=hip', 400, '/family'],
  ])('is refused for %s', async (_what, query, status, pointer) => {
    expect((await w.engineer.get(at(query)).expect(status)).body.errors).toMatchObject([{ pointer }])
  })

  it('is accepted by a writer alone, as it was read alone', async () => {
    const { seen } = await preview('to=hinge%202.1.0&family=knee')
    const body = { to: 'hinge 2.1.0', family: 'knee', seen }
    await w.other.post(`/api/changes/${key}/carry-over`, body).expect(403)
    await w.builder.post(`/api/changes/${key}/carry-over`, body).expect(403)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/watchdog', from: 300, to: 310 }] }).expect(200)
    const refused = await w.engineer.post(`/api/changes/${key}/carry-over`, body).expect(409)
    expect(refused.body).toMatchObject({ type: '/problems/content-differs', errors: [{ pointer: '/seen' }] })
    expect((await read(w.engineer, key)).set.families.knee.values).toMatchObject({ watchdog: 310 })
  })

  it('becomes ordinary edits of the draft: a draft point that can be gone back to', async () => {
    const { seen, edits } = await preview('to=hinge%202.1.0&family=knee')
    const view = (await w.engineer.post(`/api/changes/${key}/carry-over`, { to: 'hinge 2.1.0', family: 'knee', seen }).expect(200)).body as ChangeView
    expect(view.set.families.knee.values).toEqual({ velocityGain: 3.2, busWatchdog: 310, speedLimit: 2 * Math.PI })
    expect(Object.values(view.set.joints).map((j) => j.firmware)).toEqual(['hinge 2.1.0', 'hinge 2.1.0'])
    const [point, before] = (await w.engineer.get(`/api/changes/${key}/points`).expect(200)).body as DraftPointView[]
    expect(point.edits).toHaveLength(edits.length)
    expect((await w.engineer.get(at('to=hinge%202.1.0&family=knee')).expect(409)).body).toMatchObject({ type: '/problems/wrong-state' })
    await w.engineer.post(`/api/changes/${key}/back`, { point: before.number }).set('If-Match', `"${view.revision}"`).expect(200)
    expect((await read(w.engineer, key)).set.joints['l1-knee'].firmware).toBe('hinge 2.0.0')
  })

  it('is refused once the change is submitted', async () => {
    const { seen } = await preview('to=hinge%202.1.0&family=knee')
    await w.engineer.post(`/api/changes/${key}/carry-over`, { to: 'hinge 2.1.0', family: 'knee', seen }).expect(200)
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/l1-knee/firmware', from: 'hinge 2.1.0', to: 'hinge 2.0.0' }] }).expect(200)
    const { seen: again } = await preview('to=hinge%202.1.0&joints=l1-knee')
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/l1-knee/firmware', from: 'hinge 2.0.0', to: 'hinge 2.1.0' }] }).expect(200)
    await w.engineer.put(`/api/changes/${key}/text`, { text: printSet(twoKnees()) }).set('If-Match', `"${(await read(w.engineer, key)).revision}"`).expect(200)
    await submitted(w, key)
    await w.engineer.post(`/api/changes/${key}/carry-over`, { to: 'hinge 2.1.0', joints: ['l1-knee'], seen: again }).expect(409)
  })
})

describe('two versions of a firmware line', () => {
  let w: Walker
  beforeAll(async () => {
    w = await aWalker()
    await aFirmware(w, { version: '2.0.0', schema: hingeSchema('2.0.0') })
  })

  it('are compared: added, removed, moved, rescaled, renamed, with the rules that lead over', async () => {
    const view = (await w.observer.get('/api/firmware/hinge/2.1.0/since/2.0.0').expect(200)).body as FirmwareComparisonView
    expect(view).toMatchObject({ line: 'hinge', before: { version: '2.0.0', state: 'published' }, after: { version: '2.1.0' }, carry: { from: '2.0.0', renames: { watchdog: 'busWatchdog' } } })
    const by = new Map(view.parameters.map((p) => [p.parameter, p]))
    expect(by.get('softStart')).toMatchObject({ kind: 'added' })
    expect(by.get('busWatchdog')).toMatchObject({ kind: 'changed', renamedFrom: 'watchdog' })
    expect(by.get('speedLimit')?.aspects.map((a) => a.aspect)).toContain('unit')
    expect(view.titles.softStart).toEqual({ title: 'Soft start', unit: 's' })
    expect(by.has('currentGain')).toBe(false)
    expect(view.schemaTextBefore).not.toBe(view.schemaTextAfter)
  })

  it('are compared the other way round too, and each with itself', async () => {
    const back = (await w.observer.get('/api/firmware/hinge/2.0.0/since/2.1.0').expect(200)).body as FirmwareComparisonView
    expect(back.parameters.find((p) => p.parameter === 'softStart')).toMatchObject({ kind: 'removed' })
    expect(back.carry).toBeNull()
    expect((await w.observer.get('/api/firmware/hinge/2.0.0/since/2.0.0').expect(200)).body).toMatchObject({ parameters: [], image: [] })
  })

  it('that are not there are not found', async () => {
    await w.observer.get('/api/firmware/hinge/2.1.0/since/9.0.0').expect(404)
    await w.observer.get('/api/firmware/hinge/9.0.0/since/2.1.0').expect(404)
  })
})
