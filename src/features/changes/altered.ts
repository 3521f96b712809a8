import { editsBetween } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { fromPointer } from '../../../shared/parameters/paths.ts'

export interface Altered {
  families: ReadonlySet<string>
  joints: ReadonlySet<string>
  /** the family with most alterations, its joints counted in; null when nothing is altered */
  most: string | null
}

/** Families and joints whose own settings differ from the base. */
export function alteredIn(set: MachineSet, base: MachineSet): Altered {
  const families = new Set<string>()
  const joints = new Set<string>()
  const counts = new Map<string, number>()
  for (const { pointer } of editsBetween(base, set)) {
    const [top, key] = fromPointer(pointer)
    if (top === 'families') families.add(key)
    if (top === 'joints') joints.add(key)
    const family = top === 'families' ? key : top === 'joints' ? set.joints[key]?.family : undefined
    if (family !== undefined && Object.hasOwn(set.families, family)) counts.set(family, (counts.get(family) ?? 0) + 1)
  }
  const [most] = [...counts].sort((a, b) => b[1] - a[1])
  return { families, joints, most: most?.[0] ?? null }
}
