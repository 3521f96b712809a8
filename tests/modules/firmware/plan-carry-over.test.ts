import { describe, expect, it } from 'vitest'
import type { CarryVersions } from '../../../server/modules/firmware/carry-versions.ts'
import { planCarryOver } from '../../../server/modules/firmware/plan-carry-over.ts'
import { applyEdits } from '../../../shared/parameters/edits.ts'
import type { MachineSet, Values } from '../../../shared/parameters/machine-set.ts'
import { firmware } from '../../registers/a-schema.ts'
import { twoKnees } from '../../support/a-walker.ts'

const to = firmware('hinge-2.1.0')
const versions: CarryVersions = { from: firmware('hinge-2.0.0'), fromVersion: '2.0.0', fromName: 'hinge 2.0.0', to, toName: 'hinge 2.1.0', rules: to.carry! }

/** Two knees on hinge 2.0.0 with these values. */
function knees(family: Values, own: Record<string, Values> = {}, firmwareOf: Record<string, string> = {}): MachineSet {
  const set = twoKnees()
  set.families.knee.values = family
  for (const [key, joint] of Object.entries(set.joints)) Object.assign(joint, { firmware: firmwareOf[key] ?? 'hinge 2.0.0', values: own[key] ?? {} })
  return set
}
const both = ['l1-knee', 'r1-knee']
const after = (set: MachineSet, joints: readonly string[]) => applyEdits(set, planCarryOver(set, joints, versions).edits)

describe('a family that is carried over whole', () => {
  it('takes its renames, units and added values with it; every value has its row', () => {
    const set = knees({ watchdog: 300, speedLimit: 60, velocityGain: 3.2 })
    const plan = planCarryOver(set, both, versions)
    const now = applyEdits(set, plan.edits)
    // 60 rpm = 2π rad/s (definition of the minute); the nearest double
    expect(now.families.knee.values).toEqual({ busWatchdog: 300, speedLimit: 2 * Math.PI, velocityGain: 3.2 })
    expect(Object.values(now.joints).map((j) => j.firmware)).toEqual(['hinge 2.1.0', 'hinge 2.1.0'])
    expect(plan.rows).toEqual([
      { place: 'family', key: 'knee', kind: 'renamed', from: 'watchdog', to: 'busWatchdog', before: 300, after: 300, rounded: false, fromUnit: 'ms', toUnit: 'ms' },
      { place: 'family', key: 'knee', kind: 'converted', from: 'speedLimit', to: 'speedLimit', before: 60, after: 2 * Math.PI, rounded: true, fromUnit: 'rpm', toUnit: 'rad/s' },
      { place: 'family', key: 'knee', kind: 'kept', from: 'velocityGain', to: 'velocityGain', before: 3.2, after: 3.2, rounded: false, fromUnit: 'A·s/rad', toUnit: 'A·s/rad' },
    ])
    expect(plan.problems).toEqual([])
  })

  it('takes the own values of its joints with it', () => {
    const now = after(knees({ speedLimit: 60 }, { 'l1-knee': { speedLimit: 30, watchdog: 0 } }), both)
    expect(now.joints['l1-knee'].values).toEqual({ speedLimit: Math.PI, busWatchdog: 0 })
    expect(now.joints['r1-knee'].values).toEqual({})
  })

  it('adds what the new version begins with only where that is not its default anyway', () => {
    const rules = { ...to.carry!, defaults: { accelerationLimit: 45, softStart: 0.8 } }
    const plan = planCarryOver(knees({}), both, { ...versions, rules })
    expect(plan.rows).toEqual([{ place: 'family', key: 'knee', kind: 'added', from: null, to: 'accelerationLimit', before: null, after: 45, rounded: false, fromUnit: '', toUnit: 'rad/s²' }])
  })

  it('names the defaults that differ where nobody typed a value, in the unit of now', () => {
    const { defaults } = planCarryOver(knees({ velocityGain: 3.2 }, { 'l1-knee': { speedLimit: 30 } }), both, versions)
    expect(defaults).toEqual([
      // 38.2 rpm by default before, 4 rad/s now; 38.2 · 2π/60, which the test's own doubles round in the last place
      { parameter: 'speedLimit', title: 'Speed limit', unit: 'rad/s', before: expect.closeTo((38.2 * 2 * Math.PI) / 60, 12), after: 4, joints: ['r1-knee'] },
      // a constant of the firmware, which no value can hold back
      { parameter: 'encoderResolution', title: 'Encoder resolution', unit: 'counts', before: 16384, after: 65536, joints: both },
    ])
  })

  it('leaves to a person what has no place, what breaks the new bounds, and a name that is taken', () => {
    const rules = { ...to.carry!, renames: { watchdog: 'busWatchdog', lampBrightness: 'windingLimit' } }
    const set = knees({ watchdog: 300, busWatchdog: 200, lampBrightness: 999, noSuchThing: 1 })
    const plan = planCarryOver(set, both, { ...versions, rules })
    expect(plan.problems.map((p) => p.pointer)).toEqual(['/families/knee/values/watchdog', '/families/knee/values/lampBrightness', '/families/knee/values/noSuchThing'].filter((p) => plan.problems.some((q) => q.pointer === p)))
    expect(plan.problems.find((p) => p.pointer.endsWith('/watchdog'))?.detail).toContain('stands already')
    expect(plan.problems.find((p) => p.pointer.endsWith('/noSuchThing'))?.detail).toContain('no place')
    const now = applyEdits(set, plan.edits).families.knee.values
    expect(now).toMatchObject({ watchdog: 300, busWatchdog: 200, noSuchThing: 1 })
  })

  it('does not convert twice what a joint that moved before takes in the new unit already', () => {
    const set = knees({ speedLimit: 6 }, {}, { 'r1-knee': 'hinge 2.1.0' })
    const plan = planCarryOver(set, ['l1-knee'], versions)
    expect(plan.problems).toEqual([{ pointer: '/families/knee/values/speedLimit', detail: expect.stringContaining('nobody can say which unit') }])
    expect(applyEdits(set, plan.edits).families.knee.values).toEqual({ speedLimit: 6 })
  })
})

describe('some joints of a family', () => {
  it('get values of their own where a unit changes; the family’s stay for the others', () => {
    const set = knees({ speedLimit: 60, velocityGain: 3.2 })
    const plan = planCarryOver(set, ['l1-knee'], versions)
    const now = applyEdits(set, plan.edits)
    expect(now.families.knee.values).toEqual({ speedLimit: 60, velocityGain: 3.2 })
    expect(now.joints['l1-knee']).toMatchObject({ firmware: 'hinge 2.1.0', values: { speedLimit: 2 * Math.PI } })
    expect(now.joints['r1-knee']).toMatchObject({ firmware: 'hinge 2.0.0', values: {} })
    expect(plan.rows).toMatchObject([{ place: 'joint', key: 'l1-knee', kind: 'converted', from: 'speedLimit', fromUnit: 'rpm', toUnit: 'rad/s' }])
  })

  it('leave to a person what the family calls by a name that only one version knows', () => {
    const set = knees({ watchdog: 300 })
    const plan = planCarryOver(set, ['l1-knee'], versions)
    expect(plan.problems).toEqual([{ pointer: '/families/knee/values/watchdog', detail: expect.stringMatching(/called busWatchdog .* R1 knee of the family still needs it/) }])
    expect(applyEdits(set, plan.edits).families.knee.values).toEqual({ watchdog: 300 })
  })

  it('are the whole family when the others stand on the new version already', () => {
    const now = after(knees({ watchdog: 300 }, {}, { 'r1-knee': 'hinge 2.1.0' }), ['l1-knee'])
    expect(now.families.knee.values).toEqual({ busWatchdog: 300 })
  })
})
