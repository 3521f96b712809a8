import { same } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { ResolvedJoint } from './resolve-joint.ts'

/**
 * Joints whose effective values, model or image bytes differ from the base, and joints that are new.
 *
 * A joint that can't be resolved counts as touched: nobody can say that it is the same.
 */
export function touchedJoints(candidate: MachineSet, base: MachineSet, resolved: ReadonlyMap<string, ResolvedJoint>, resolvedBase: ReadonlyMap<string, ResolvedJoint>): string[] {
  return Object.keys(candidate.joints).filter((joint) => {
    const now = resolved.get(joint)
    const then = resolvedBase.get(joint)
    if (!Object.hasOwn(base.joints, joint) || now?.kind !== 'resolved' || then?.kind !== 'resolved') return true
    const a = candidate.joints[joint]
    const b = base.joints[joint]
    return (
      now.imageSha256 !== then.imageSha256 ||
      !same(now.values, then.values) ||
      a.family !== b.family || a.bus !== b.bus || a.address !== b.address || a.firmware !== b.firmware || a.board !== b.board ||
      !same(candidate.families[a.family].driveTrain, base.families[b.family].driveTrain)
    )
  })
}
