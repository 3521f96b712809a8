import type { EntityManager } from '@mikro-orm/core'
import { boardBindingProblem } from '../boards/board-binding.ts'
import type { Release } from './release.entity.ts'

/** A joint of a release that must not be flashed as released, with the reason. */
export interface UnfitJoint {
  joint: string
  name: string
  why: string
}

/** Joints whose board-bound values belong to another board than the one recorded there. */
export async function unfitJoints(em: EntityManager, release: Release): Promise<UnfitJoint[]> {
  const found: UnfitJoint[] = []
  for (const [joint, { name }] of Object.entries(release.set.joints)) {
    const why = await boardBindingProblem(em, release, joint)
    if (why) found.push({ joint, name, why })
  }
  return found
}
