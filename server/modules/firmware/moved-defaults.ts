import type { CarryOverPreview } from '../../../shared/contract/firmware.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../shared/registers/parameter-schema.ts'
import { convertValue } from '../../../shared/units/quantity.ts'
import type { CarryVersions } from './carry-versions.ts'

/** The default before, in the unit of now; null where it can't be said in it. */
function defaultBefore(old: Parameter, now: Parameter, { rules }: CarryVersions) {
  if (old.default === null) return null
  if (!Object.hasOwn(rules.units, now.name) || typeof old.default === 'boolean') return old.default
  const changed = convertValue(old.default, rules.units[now.name], now.unit)
  return changed.kind === 'refused' ? null : changed.value
}

/**
 * Values that nobody typed and that differ all the same, because the firmware's default does: with the joints that take them from the
 * firmware before and after.
 */
export function movedDefaults(set: MachineSet, moving: readonly string[], versions: CarryVersions): CarryOverPreview['defaults'] {
  const { from, to, rules } = versions
  const oldNames = new Map(Object.entries(rules.renames).map(([old, now]) => [now, old]))
  return to.parameters.flatMap((now) => {
    const oldName = from.byName.has(now.name) ? now.name : oldNames.get(now.name)
    const old = oldName === undefined ? undefined : from.byName.get(oldName)
    if (!old || now.default === null || now.role === 'bus.address' || Object.hasOwn(rules.defaults, now.name)) return []
    const before = defaultBefore(old, now, versions)
    if (before === null || String(before) === String(now.default)) return []
    const joints = moving.filter((joint) => {
      const { family, values } = set.joints[joint]
      return !Object.hasOwn(values, old.name) && !Object.hasOwn(set.families[family].values, old.name)
    })
    return joints.length === 0 ? [] : [{ parameter: now.name, title: now.title, unit: now.unit ?? '', before, after: now.default, joints }]
  })
}
