import { describe, expect, it } from 'vitest'
import { foldGroups } from '../../../server/modules/reviews/fold-groups.ts'
import type { DiffRow, DiffView } from '../../../shared/contract/reviews.ts'
import type { Edit } from '../../../shared/parameters/edits.ts'
import { aDraft, aWalker, read, through, twoKnees } from '../../support/a-walker.ts'

describe('what a change alters', () => {
  it('leaves nothing out: settings, values by origin, drive trains, families, buses, joints that come and go', async () => {
    const w = await aWalker()
    const set = twoKnees()
    set.joints['r1-knee'].values.velocityGain = 2.9
    await through(w, await aDraft(w, set), '1.0.0')
    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Many things', reason: 'Tried.' }).expect(201)).body as { key: string }
    const { set: now } = await read(w.engineer, key)
    const edits: Edit[] = [
      { pointer: '/families/knee/values/velocityGain', from: now.families.knee.values.velocityGain, to: 3.4 },
      { pointer: '/families/knee/name', from: now.families.knee.name, to: 'Knees' },
      { pointer: '/families/knee/driveTrain/N', from: now.families.knee.driveTrain.N, to: 150 },
      { pointer: '/buses/fore/pullUp', from: now.buses.fore.pullUp, to: 1800 },
      { pointer: '/joints/l1-knee/address', from: now.joints['l1-knee'].address, to: 0x35 },
      { pointer: '/joints/l1-knee/name', from: now.joints['l1-knee'].name, to: 'Left fore knee' },
      { pointer: '/joints/l2-knee', to: { ...now.joints['l1-knee'], name: 'L2 knee', address: 0x36 } },
    ]
    await w.engineer.patch(`/api/changes/${key}/values`, { edits }).expect(200)
    const diff = (await w.observer.get(`/api/changes/${key}/diff`).expect(200)).body as DiffView
    const rows = diff.groups.flatMap((g) => [...g.rows, ...g.own.flatMap((o) => o.rows)])
    const shown = (k: string) => rows.find((r) => r.key === k)
    expect(shown('value:l1-knee:velocityGain')).toMatchObject({ before: { value: '3.2', origin: 'family' }, after: { value: '3.4' }, pointer: '/families/knee/values/velocityGain' })
    expect(shown('value:l1-knee:name')).toMatchObject({ before: { value: now.joints['l1-knee'].name }, after: { value: 'Left fore knee' }, pointer: '/joints/l1-knee/name' })
    expect(shown('value:l1-knee:address')).toMatchObject({ before: { value: '0x33' }, after: { value: '0x35' } })
    // r1 keeps its own gain, so that only its name of the family alters; everything else it has from its family
    expect(shown('value:r1-knee:velocityGain')).toBeUndefined()
    expect(shown('value:r1-knee:family')).toMatchObject({ after: { value: 'Knees' } })
    expect(diff.joints).toMatchObject([{ key: 'joint:l2-knee', joint: 'l2-knee', is: 'added', pointer: '/joints/l2-knee' }])
    expect(shown('value:l2-knee:velocityGain')).toMatchObject({ before: null, after: { value: '3.4' } })
    expect(diff.driveTrains).toMatchObject([{ family: 'knee', rows: [{ field: 'N', after: '150', pointer: '/families/knee/driveTrain/N' }] }])
    expect(diff.families).toMatchObject([{ family: 'knee', rows: [{ key: 'family:knee:name', field: 'name', after: 'Knees' }] }])
    expect(diff.buses).toMatchObject([{ bus: 'fore', rows: [{ key: 'bus:fore:pullUp', after: '1800', pointer: '/buses/fore/pullUp' }] }])
    const keys = [...rows, ...diff.joints, ...[...diff.driveTrains, ...diff.families, ...diff.buses].flatMap((d) => d.rows)].map((r) => r.key)
    expect(new Set(keys).size).toBe(keys.length)
    expect(diff.counts.rows).toBe(keys.length)

    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/joints/r1-knee', from: now.joints['r1-knee'] }] }).expect(200)
    const without = (await w.observer.get(`/api/changes/${key}/diff`).expect(200)).body as DiffView
    expect(without.joints.find((j) => j.joint === 'r1-knee')).toMatchObject({ is: 'removed' })
    expect(without.groups.flatMap((g) => g.joints)).not.toContain('r1-knee')
  })

  it('shows a family value that reaches no joint, since it is signed too', async () => {
    const w = await aWalker()
    const set = twoKnees()
    for (const joint of Object.values(set.joints)) joint.values.velocityGain = 3
    await through(w, await aDraft(w, set), '1.0.0')
    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Unseen', reason: 'Tried.' }).expect(201)).body as { key: string }
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/velocityGain', from: 3.2, to: 3.4 }] }).expect(200)
    const diff = (await w.observer.get(`/api/changes/${key}/diff`).expect(200)).body as DiffView
    expect(diff.groups).toEqual([])
    expect(diff.families).toMatchObject([{ family: 'knee', rows: [{ field: 'velocityGain', before: '3.2', after: '3.4', pointer: '/families/knee/values/velocityGain' }] }])
  })

  it('shows values of a draft that does not fit its schema, without bytes', async () => {
    const w = await aWalker()
    await through(w, await aDraft(w), '1.0.0')
    const { key } = (await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Too much', reason: 'Tried.' }).expect(201)).body as { key: string }
    await w.engineer.patch(`/api/changes/${key}/values`, { edits: [{ pointer: '/families/knee/values/currentLimit', from: 2.6, to: 700 }] }).expect(200)
    const { groups } = (await w.observer.get(`/api/changes/${key}/diff`).expect(200)).body as DiffView
    expect(groups[0].rows.find((r) => r.parameter === 'currentLimit')).toMatchObject({ before: { value: '2.6' }, after: { value: '700', bytes: '' } })
  })
})

describe('folding', () => {
  const row = (parameter: string, after: string): Omit<DiffRow, 'key' | 'hash' | 'pointer'> => ({ parameter, title: parameter, unit: '', role: null, register: null, before: null, after: { value: after, origin: 'family', bytes: '', number: null }, changePercent: null })
  const [gain, own, limit] = [row('gain', '5'), row('gain', '4'), row('limit', '3')]

  it('puts what most joints share first, and the rest of a joint that departs beside it', () => {
    expect(foldGroups([{ family: 'knee', joint: 'a', rows: [own, limit] }, { family: 'knee', joint: 'b', rows: [gain, limit] }, { family: 'knee', joint: 'c', rows: [gain, limit] }, { family: 'hip', joint: 'd', rows: [] }])).toEqual([
      { family: 'knee', joints: ['b', 'c', 'a'], rows: [gain, limit], own: [{ joint: 'a', rows: [own] }] },
    ])
  })

  it('keeps a joint apart that lacks one of the rows', () => {
    expect(foldGroups([{ family: 'knee', joint: 'a', rows: [gain, limit] }, { family: 'knee', joint: 'b', rows: [limit] }]).map((g) => g.joints)).toEqual([['a'], ['b']])
  })
})
