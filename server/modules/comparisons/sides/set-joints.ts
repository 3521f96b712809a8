import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import { effectiveValues } from '../../../../shared/parameters/effective.ts'
import type { ParameterSchema } from '../../../../shared/registers/parameter-schema.ts'
import { resolveJoint } from '../../checks/resolve-joint.ts'
import { hexAddress, type SideJoint } from '../side.ts'

/**
 * Joints of a machine set as a side: their values, and their images where they can be encoded.
 *
 * @param images  images that are kept as they are, by joint; the others are encoded with release number 0
 */
export function jointsOfSet(set: MachineSet, only: string | null, schemas: Record<string, ParameterSchema>, images: ReadonlyMap<string, Uint8Array> = new Map()): SideJoint[] {
  const read = new Map(Object.entries(schemas))
  return Object.entries(set.joints)
    .filter(([key]) => only === null || key === only)
    .flatMap(([key, joint]): SideJoint[] => {
      const schema = schemas[joint.firmware]
      if (!schema) return []
      const resolved = resolveJoint(set, key, read, 0)
      const taken = schema.parameters.filter((p) => p.register !== null && p.register.access !== 'ro')
      const values = resolved.kind === 'resolved' ? resolved.values : effectiveValues(set, key, taken)
      return [{
        key,
        name: joint.name,
        settings: { family: set.families[joint.family]?.name ?? joint.family, bus: set.buses[joint.bus]?.name ?? joint.bus, address: hexAddress(joint.address), firmware: joint.firmware, board: joint.board ?? '' },
        driveTrain: set.families[joint.family]?.driveTrain ?? null,
        schema,
        values: new Map(values.map((v) => [v.name, { value: v.value, origin: v.origin }])),
        image: images.get(key) ?? (resolved.kind === 'resolved' ? resolved.encoded.image : null),
        problem: resolved.kind === 'resolved' ? null : `${joint.name} can't be encoded: ${resolved.problems[0].detail}`,
      }]
    })
}
