import { same } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'

/** Everything that a joint's effective values, their origins, its model and its image follow from. */
function standing(set: MachineSet, key: string): unknown {
  const { family, bus, address, firmware, board, values } = set.joints[key]
  const settings = set.families[family]
  return { family, bus, address, firmware, board: board ?? null, own: values, shared: Object.fromEntries(Object.entries(settings?.values ?? {}).filter(([n]) => !Object.hasOwn(values, n))), driveTrain: settings?.driveTrain ?? null }
}

/**
 * Joints of either set that are new, gone, or stand otherwise in the other: what a change touches, without a schema.
 *
 * It agrees with the check's own answer, which compares encoded registers: equal standings encode to equal bytes, and another value or
 * origin counts as touched even where the bytes stay the same.
 */
export function jointsApart(a: MachineSet, b: MachineSet): Set<string> {
  const keys = new Set([...Object.keys(a.joints), ...Object.keys(b.joints)])
  return new Set([...keys].filter((k) => !Object.hasOwn(a.joints, k) || !Object.hasOwn(b.joints, k) || !same(standing(a, k), standing(b, k))))
}
