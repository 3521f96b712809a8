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

/** The last revision of each of these joints that has one, by the joint's id. */
async function lastOf(em: EntityManager, joints: readonly Joint[]): Promise<Map<number, Revision>> {
  const ids = joints.map((j) => j.id)
  // Numbers and ids of a joint's revisions grow together. Read with the rest of the transaction, where there is one.
  const last = (await em.getConnection().execute(`select max(id) as id from revision where joint_id in (${ids.map(() => '?').join(', ')}) group by joint_id`, ids, 'all', em.getTransactionContext())) as { id: number }[]
  return new Map((await em.find(Revision, { id: { $in: last.map((r) => r.id) } })).map((r) => [r.joint.id, r]))
}

/** The number that each joint's revision has, or will have, in a release of this content: a joint that is as it was keeps its revision. */
export async function revisionNumbers(em: EntityManager, machine: Machine, content: Content): Promise<Map<string, number>> {
  const known = new Map((await em.find(Joint, { machine })).map((j) => [j.key, j]))
  const lasts = await lastOf(em, [...known.values()])
  const numbers = new Map<string, number>()
  for (const key of content.joints.keys()) {
    const joint = known.get(key)
    const last = joint && lasts.get(joint.id)
    numbers.set(key, last?.contentHash === hashOf(revisionContent(content, key)) ? last.number : (last?.number ?? 0) + 1)
  }
  return numbers
}

/** The revisions themselves, by joint: the last one of a joint of which nothing altered, else a new one. */
export async function revisionsFor(em: EntityManager, joints: ReadonlyMap<string, Joint>, content: Content, now: Date): Promise<Map<string, Revision>> {
  const lasts = await lastOf(em, [...joints.values()])
  return new Map(
    [...content.joints.keys()].map((key) => {
      const joint = joints.get(key)!
      const frozen = revisionContent(content, key)
      const contentHash = hashOf(frozen)
      const last = lasts.get(joint.id)
      return [key, last?.contentHash === contentHash ? last : em.create(Revision, { joint, number: (last?.number ?? 0) + 1, content: frozen, contentHash, createdAt: now })]
    }),
  )
}
