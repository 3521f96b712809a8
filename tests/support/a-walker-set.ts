import { dunlin } from '../../server/demo/dunlin.ts'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'

/** Two knees of Dunlin on one bus, with the demo's numbers, on this firmware version. */
export function twoKnees(firmware = 'hinge 2.1.0'): MachineSet {
  const { fore } = dunlin.buses
  const set: MachineSet = structuredClone({ buses: { fore }, families: { knee: dunlin.families.knee }, joints: { 'l1-knee': dunlin.joints['l1-knee'], 'r1-knee': dunlin.joints['r1-knee'] } })
  for (const joint of Object.values(set.joints)) joint.firmware = firmware
  return set
}
