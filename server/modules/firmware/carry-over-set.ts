import type { EntityManager } from '@mikro-orm/core'
import type { CarryOver, CarryOverPreview } from '../../../shared/contract/firmware.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { saveEdits } from '../changes/save-draft.ts'
import type { Person } from '../people/person.entity.ts'
import { carryVersions } from './carry-versions.ts'
import { planCarryOver } from './plan-carry-over.ts'
import { hashOf } from './schema-cache.ts'

export type CarryWish = Pick<CarryOver, 'to' | 'joints' | 'family'>

/** The joints that the wish names and that are not on the version already. */
function wished(set: MachineSet, { to, joints, family }: CarryWish): string[] {
  if ((joints === undefined) === (family === undefined)) throw new DomainError('invalid-request', 'Say which joints move, or which family: one of the two. Nothing was altered.', { fields: [{ pointer: '/joints', detail: 'either joints or family' }] })
  if (family !== undefined && !Object.hasOwn(set.families, family)) throw new DomainError('invalid-request', `The draft has no family "${family}". Nothing was altered.`, { fields: [{ pointer: '/family', detail: 'is no family of the draft' }] })
  const unknown = (joints ?? []).find((joint) => !Object.hasOwn(set.joints, joint))
  if (unknown !== undefined) throw new DomainError('invalid-request', `The draft has no joint "${unknown}". Nothing was altered.`, { fields: [{ pointer: '/joints', detail: `${unknown} is no joint of the draft` }] })
  const named = joints ?? Object.keys(set.joints).filter((joint) => set.joints[joint].family === family)
  const moving = named.filter((joint) => set.joints[joint].firmware !== to)
  if (moving.length === 0) throw new DomainError('wrong-state', `All of these joints are on ${to} already. Nothing was altered.`)
  return moving
}

/** What carrying over would do to the draft as it stands; alters nothing. */
export async function previewCarryOver(em: EntityManager, change: Change, wish: CarryWish): Promise<CarryOverPreview> {
  const set = setOf(change.text)
  const moving = wished(set, wish)
  const plan = planCarryOver(set, moving, await carryVersions(em, set, moving, wish.to))
  return { ...plan, seen: hashOf(plan.edits) }
}

/**
 * Carries joints over to another version of their firmware, as ordinary edits of the draft that were read before.
 *
 * @throws DomainError content-differs when the draft moved since the preview; what saveEdits refuses
 */
export async function carryOverSet(em: EntityManager, change: Change, wish: CarryOver, saving: { person: Person; now: Date }): Promise<void> {
  const plan = await previewCarryOver(em, change, wish)
  if (plan.seen !== wish.seen) throw new DomainError('content-differs', 'The draft, or the rules of the new version, moved since you read what is carried over. Nothing was altered; read it again.', { fields: [{ pointer: '/seen', detail: 'is not what would be done now' }] })
  await saveEdits(em, change, plan.edits, saving)
}
