import { beforeAll, describe, expect, it } from 'vitest'
import { sideKinds } from '../../../server/modules/comparisons/sides.ts'
import type { CompareChoices, ComparisonView } from '../../../shared/contract/comparisons.ts'
import { readText } from '../../../shared/parameters/set-text.ts'
import { aFirmware } from '../../support/a-firmware.ts'
import { aMachine, aRelease } from '../../support/a-release.ts'
import { aSet } from '../../support/a-set.ts'
import { aDraft, aWalker, hingeSchema, through, twoKnees, type Walker } from '../../support/a-walker.ts'

const gain = { pointer: '/families/knee/values/velocityGain', from: 3.2, to: 3.1 }

describe('comparing', () => {
  let w: Walker
  let change: string
  const compare = async (a: string, b: string) => (await w.observer.get(`/api/compare?a=${encodeURIComponent(a)}&b=${encodeURIComponent(b)}`).expect(200)).body as ComparisonView
  beforeAll(async () => {
    w = await aWalker()
    await through(w, await aDraft(w))
    change = ((await w.engineer.post('/api/changes', { machine: 'dunlin', title: 'Softer knees', reason: 'The gear train hums.' }).expect(201)).body as { key: string }).key
    await w.engineer.patch(`/api/changes/${change}/values`, { edits: [gain] }).expect(200)
  })

  it('finds a release the same as itself', async () => {
    const view = await compare('release:dunlin@1.0.0', 'release:dunlin@1.0.0')
    expect(view).toMatchObject({ groups: [], same: [{ key: 'l1-knee' }, { key: 'r1-knee' }], a: { label: 'Dunlin 1.0.0', note: 'current, sequence number 1', joints: 2, release: { machine: 'dunlin', version: '1.0.0' } } })
    expect(view.textA).toBe(view.textB)
    expect(readText(view.textA).ok).toBe(true)
  })

  it('shows a change against its release by value and by register, joints that alter alike together', async () => {
    const { groups, same } = await compare('release:dunlin@1.0.0', `change:${change}`)
    expect(same).toEqual([])
    expect(groups).toHaveLength(1)
    const [group] = groups
    expect(group).toMatchObject({ only: null, settings: [], driveTrain: [], problems: [], joints: [{ key: 'l1-knee', keyB: 'l1-knee' }, { key: 'r1-knee' }] })
    expect(group.values).toEqual([{ parameter: 'velocityGain', title: 'Velocity gain', nameA: null, unitA: 'A·s/rad', unitB: 'A·s/rad', a: { value: 3.2, origin: 'family' }, b: { value: 3.1, origin: 'family' }, changePercent: expect.closeTo(-3.125, 10) }])
    // hinge 2.1.0 holds the gain as q7.24 at 0x24: 3.2·2^24 = 53687091.2, 3.1·2^24 = 52009369.6, both rounded to the nearest, low byte first
    expect(group.registers).toEqual([{ address: 0x24, bytes: 4, what: 'Velocity gain', encodingA: 'q7.24', encodingB: 'q7.24', a: '33 33 33 03', b: '9A 99 19 03' }])
    // the release number and the checksum are each joint's own
    expect([...new Set(group.own.map((r) => r.joint))]).toEqual(['L1 knee', 'R1 knee'])
    expect(group.own.filter((r) => r.what === 'release number').map((r) => [r.a, r.b])).toEqual([['01 00 00 00', '00 00 00 00'], ['01 00 00 00', '00 00 00 00']])
    expect(group.own.some((r) => r.what === 'checksum')).toBe(true)
  })

  it('shows what sits elsewhere, and joints that stand on one side alone', async () => {
    const set = twoKnees()
    set.joints['r1-knee'].address = 0x3c
    set.families.knee.driveTrain.N = 151
    set.joints['l2-knee'] = { ...set.joints['l1-knee'], name: 'L2 knee', address: 0x44, board: 'H-0999' }
    delete (set.joints as Record<string, unknown>)['l1-knee']
    const other = await aDraft(w, set, 'Moved')
    const { groups } = await compare('release:dunlin@1.0.0', `change:${other}`)
    const of = (key: string) => groups.find((g) => g.joints.some((j) => j.key === key))!
    expect(of('l1-knee')).toMatchObject({ only: 'a', values: [] })
    expect(of('l2-knee')).toMatchObject({ only: 'b' })
    expect(of('r1-knee')).toMatchObject({ only: null, settings: [{ field: 'Address', a: '0x3B', b: '0x3C' }], driveTrain: [{ field: 'N', b: '151' }] })
    expect(of('r1-knee').values.map((v) => v.parameter)).toEqual(['busAddress'])
  })

  it('holds one joint against its like of a whole machine, and two single joints against each other', async () => {
    const like = await compare('revision:dunlin/l1-knee@r1', `change:${change}`)
    expect(like.groups).toMatchObject([{ joints: [{ key: 'l1-knee' }], values: [{ parameter: 'velocityGain' }] }])
    // a revision's image has release number 0, as the draft's
    expect(like.groups[0].own.map((r) => r.what)).not.toContain('release number')
    const two = await compare('release:dunlin@1.0.0:l1-knee', 'release:dunlin@1.0.0:r1-knee')
    expect(two.groups).toMatchObject([{ joints: [{ key: 'l1-knee', keyB: 'r1-knee' }] }])
    expect(two.groups[0].settings.map((s) => s.field)).toEqual(expect.arrayContaining(['Address', 'Board of the bound values']))
    expect(two.textA).toContain('"name": "L1 knee"')
    expect(two.textB).toContain('"name": "R1 knee"')
  })

  it('holds two firmware versions against each other by what each parameter is called there', async () => {
    await aFirmware(w, { version: '2.0.0', schema: hingeSchema('2.0.0') })
    const set = twoKnees()
    set.families.knee.values = { watchdog: 300, speedLimit: 60 }
    for (const joint of Object.values(set.joints)) Object.assign(joint, { firmware: 'hinge 2.0.0', values: {} })
    const old = await aDraft(w, set, 'Back to 2.0.0')
    const { groups } = await compare(`change:${old}:l1-knee`, 'release:dunlin@1.0.0:l1-knee')
    const values = new Map(groups[0].values.map((v) => [v.parameter, v]))
    expect(values.get('busWatchdog')).toMatchObject({ nameA: 'watchdog', a: { value: 300 } })
    expect(values.get('speedLimit')).toMatchObject({ unitA: 'rpm', unitB: 'rad/s', a: { value: 60 }, changePercent: null })
    expect(values.get('softStart')).toMatchObject({ a: null })
    expect(groups[0].registers.find((r) => r.what.includes('Soft start'))).toMatchObject({ a: null })
  })

  it('reads nothing of a machine that the person may not read, and says the same as where nothing is', async () => {
    await aMachine(w, 'teasel')
    await aRelease(w, { machine: 'teasel', set: aSet() })
    const ask = (a: string) => w.observer.get(`/api/compare?a=${encodeURIComponent(a)}&b=release:dunlin@1.0.0`).expect(404)
    const there = (await ask('release:teasel@1.0.0')).body as { detail: string }
    const nowhere = (await ask('release:heron@1.0.0')).body as { detail: string }
    expect(there.detail.replace('teasel', 'heron')).toBe(nowhere.detail)
    await w.observer.get('/api/machines/teasel/compare-choices').expect(404)
  })

  it.each([
    ['a is missing', 'b=release:dunlin@1.0.0', 400, '/a'],
    ['b is missing', 'a=release:dunlin@1.0.0', 400, '/b'],
    ['a kind that there is not', 'a=drawing:dunlin&b=release:dunlin@1.0.0', 400, '/a'],
    ['no kind', 'a=dunlin&b=release:dunlin@1.0.0', 400, '/a'],
    ['a release that there is not', 'a=release:dunlin@9.0.0&b=release:dunlin@1.0.0', 404, '/a'],
    ['a joint that there is not', 'a=release:dunlin@1.0.0:l9-knee&b=release:dunlin@1.0.0', 404, '/a'],
    ['a form that is not the kind’s', 'a=revision:dunlin@1.0.0&b=release:dunlin@1.0.0', 404, '/a'],
    ['a revision that there is not', 'a=revision:dunlin/l1-knee@r99&b=release:dunlin@1.0.0', 404, '/a'],
    ['a change that there is not', 'a=release:dunlin@1.0.0&b=change:dunlin-999', 404, '/b'],
  ])('is refused when %s', async (_what, query, status, pointer) => {
    expect((await w.observer.get(`/api/compare?${query}`).expect(status)).body.errors).toMatchObject([{ pointer }])
  })

  it('offers what of a machine can be compared, each choice a side that there is', async () => {
    const { kinds, joints } = (await w.observer.get('/api/machines/dunlin/compare-choices').expect(200)).body as CompareChoices
    expect(kinds.map((k) => k.kind)).toEqual(sideKinds.map((k) => k.kind))
    expect(joints.map((j) => j.key)).toEqual(['l1-knee', 'r1-knee'])
    for (const { kind, narrows, choices } of kinds) {
      const [first] = choices
      if (!first) continue
      const view = await compare(first.ref, first.ref)
      expect(view.a).toMatchObject({ ref: first.ref, kind })
      if (narrows) expect((await compare(`${first.ref}:l1-knee`, `${first.ref}:l1-knee`)).a.joints).toBe(1)
    }
    expect(kinds.find((k) => k.kind === 'release')?.choices).toMatchObject([{ ref: 'release:dunlin@1.0.0', label: '1.0.0' }])
  })
})
