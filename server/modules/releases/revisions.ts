import type { EntityManager } from '@mikro-orm/core'
import canonicalize from 'canonicalize'
import type { RevisionContent } from '../../../shared/contract/releases.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import type { Content } from '../reviews/content-of.ts'
import { Revision } from './revision.entity.ts'

/** What a revision of the joint freezes of this content. */
export function revisionContent(content: Content, joint: string): RevisionContent {
  const { family, bus, address, firmware, board } = content.set.joints[joint]
  const { values, imageSha256 } = content.joints.get(joint)!
  return { family, bus, address, firmware, schemaHash: content.schemaHashes[firmware], values, driveTrain: content.set.families[family].driveTrain, board: board ?? null, imageSha256 }
}

const hashOf = (content: RevisionContent) => sha256(canonicalize(content)!)

const lastOf = async (em: EntityManager, joint: Joint): Promise<Revision | undefined> => (await em.find(Revision, { joint }, { orderBy: { number: 'desc' }, limit: 1 }))[0]

/** The number that each joint's revision has, or will have, in a release of this content: a joint that is as it was keeps its revision. */
export async function revisionNumbers(em: EntityManager, machine: Machine, content: Content): Promise<Map<string, number>> {
  const known = new Map((await em.find(Joint, { machine })).map((j) => [j.key, j]))
  const numbers = new Map<string, number>()
  for (const key of content.joints.keys()) {
    const joint = known.get(key)
    const last = joint && (await lastOf(em, joint))
    numbers.set(key, last?.contentHash === hashOf(revisionContent(content, key)) ? last.number : (last?.number ?? 0) + 1)
  }
  return numbers
}

/** The revision itself: the last one when nothing of the joint altered, else a new one. */
export async function revisionFor(em: EntityManager, joint: Joint, content: RevisionContent, now: Date): Promise<Revision> {
  const contentHash = hashOf(content)
  const last = await lastOf(em, joint)
  if (last?.contentHash === contentHash) return last
  return em.create(Revision, { joint, number: (last?.number ?? 0) + 1, content, contentHash, createdAt: now })
}
