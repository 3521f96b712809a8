import type { Edit } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'

/**
 * Everything that the figures of one joint follow from, as text: equal texts, equal figures.
 *
 * @returns null where the joint has nothing to be computed from
 */
export function figuresFollowFrom(set: MachineSet, joint: string): string | null {
  const settings = set.joints[joint]
  const family = settings && set.families[settings.family]
  return family ? JSON.stringify([settings, family.driveTrain, family.values]) : null
}

/** Edits that a joint's figures can depend on: others are left out, so that typing at another family asks nothing. */
export function editsAbout(edits: readonly Edit[], set: MachineSet, joint: string): Edit[] {
  const family = set.joints[joint]?.family
  return edits.filter(({ pointer }) => pointer.startsWith(`/joints/${joint}`) || (family !== undefined && pointer.startsWith(`/families/${family}`)) || pointer.startsWith('/buses/'))
}
