import type { EntityManager } from '@mikro-orm/core'
import type { Allowed } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { inState, writes } from '../changes/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { Signature } from '../reviews/signature.entity.ts'

/** May somebody add evidence to a change, or take it away? Its writers, until the first signature: from there on it is what was signed. */
export async function mayAttach(em: EntityManager, change: Change, person: Person): Promise<Allowed> {
  const own = writes(change, person)
  if (!own.allowed) return own
  const open = inState(change, 'draft', 'submitted', 'approved')
  if (!open.allowed) return open
  if (change.state === 'approved' || (await em.count(Signature, { change, round: change.round })) > 0) return { allowed: false, why: 'The change is signed; its evidence is part of what was signed. It has to be returned to draft first.' }
  return { allowed: true }
}

/** @throws DomainError wrong-state */
export async function mustAttach(em: EntityManager, change: Change, person: Person): Promise<void> {
  const answer = await mayAttach(em, change, person)
  if (!answer.allowed) throw new DomainError('wrong-state', `${answer.why} Nothing was altered.`)
}
