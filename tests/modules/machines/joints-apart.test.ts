import { describe, expect, it } from 'vitest'
import { resolveJoint, type ResolvedJoint } from '../../../server/modules/checks/resolve-joint.ts'
import { touchedJoints } from '../../../server/modules/checks/touched-joints.ts'
import { jointsApart } from '../../../server/modules/machines/joints-apart.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { expectParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import { aSet } from '../../support/a-set.ts'
import { smallSchema } from '../../support/small-schema.ts'

const schemas = new Map([['hinge 2.1.0', expectParameterSchema(smallSchema)]])
const resolved = (set: MachineSet) => new Map<string, ResolvedJoint>(Object.keys(set.joints).map((j) => [j, resolveJoint(set, j, schemas, 0)]))

/** What each edit of the small set touches; the check's own answer, from encoded registers, is the second route. */
describe('the joints that an edit touches', () => {
  it.each<[string, (set: MachineSet) => void, string[]]>([
    ['nothing', () => {}, []],
    ['a joint\'s value', (s) => void (s.joints['knee-starboard'].values.velocityGain = 0.6), ['knee-starboard']],
    ['a family value: joints with a value of their own stay as they are', (s) => void (s.families.knee.values.velocityGain = 0.6), ['knee-starboard']],
    ['a joint\'s own value equal to the family\'s: the origin alters', (s) => void (s.joints['knee-starboard'].values.velocityGain = 0.5), ['knee-starboard']],
    ['a drive train', (s) => void (s.families.hip.driveTrain.N = 210), ['hip-port']],
    ['an address', (s) => void (s.joints['hip-port'].address = 0x30), ['hip-port']],
    ['a bus', (s) => void (s.joints['hip-port'].bus = 'starboard'), ['hip-port']],
    ['a board', (s) => void (s.joints['knee-port'].board = 'HB-0200'), ['knee-port']],
    ['names alone', (s) => void (s.joints['knee-port'].name = 'Knee, port'), []],
    ['a bus setting, which is no joint\'s', (s) => void (s.buses.port.pullUp = 1800), []],
    ['a new joint', (s) => void (s.joints.spare = { ...s.joints['hip-port'], address: 0x31 }), ['spare']],
  ])('%s', (_what, edit, touched) => {
    const base = aSet()
    const next = aSet()
    edit(next)
    expect([...jointsApart(next, base)].sort()).toEqual(touched)
    expect(touchedJoints(next, base, resolved(next), resolved(base)).sort()).toEqual(touched)
  })

  it('counts a joint that is gone', () => {
    const next = aSet()
    delete next.joints['hip-port']
    expect([...jointsApart(next, aSet())]).toEqual(['hip-port'])
  })
})
