import type { EntityManager } from '@mikro-orm/core'
import type { Allowed } from '../../../shared/contract/people.ts'
import type { Person } from '../people/person.entity.ts'
import { stateOf, type Evidence } from './evidence.entity.ts'
import { mayAttach } from './may-attach.ts'

/** May somebody take a log away? Who uploaded it, and of a change its writers until the first signature. */
export async function mayRemove(em: EntityManager, evidence: Evidence, person: Person): Promise<Allowed> {
  if (stateOf(evidence) === 'removed') return { allowed: false, why: 'It was removed.' }
  if (evidence.change) return mayAttach(em, evidence.change, person)
  return evidence.uploadedBy.id === person.id ? { allowed: true } : { allowed: false, why: `${evidence.uploadedByName} uploaded it; nobody else takes it away.` }
}
