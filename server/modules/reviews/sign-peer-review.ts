import type { EntityManager } from '@mikro-orm/core'
import { statements } from '../../../shared/contract/reviews.ts'
import { addEvent } from '../changes/add-event.ts'
import { approve, type Change } from '../changes/change.entity.ts'
import { inState } from '../changes/permissions.ts'
import { DomainError } from '../../http/errors.ts'
import { Person } from '../people/person.entity.ts'
import { policyInForce } from '../policy/policy-in-force.ts'
import { Signature } from './signature.entity.ts'
import { mustBeAnother, mustBeReady } from './may-sign.ts'

/** A peer review, signed by somebody who read every row and whose password was re-entered. When as many as the policy asks for are signed, the change is approved. */
export async function signPeerReview(em: EntityManager, change: Change, { contentHash, person, now }: { contentHash: string; person: Person; now: Date }): Promise<void> {
  const open = inState(change, 'submitted')
  if (!open.allowed) throw new DomainError('wrong-state', `${open.why} A peer review is signed while it is submitted. Nothing was signed.`)
  if (change.contentHash !== contentHash) throw new DomainError('content-differs', 'The change moved while you signed. Nothing was signed; reload and read it again.')
  await mustBeAnother(em, change, person)
  const rowsRead = await mustBeReady(em, change, person, now)
  em.create(Signature, { change, round: change.round, meaning: 'peer review', statement: statements['peer review'], person: em.getReference(Person, person.id), personName: person.name, at: now, contentHash })
  await em.flush()
  const signed = await em.count(Signature, { change, round: change.round, meaning: 'peer review' })
  const { peerReviews } = (await policyInForce(em, change.machine)).content
  await addEvent(em, change, { kind: 'peer review', person, at: now, details: { contentHash, signed, needed: peerReviews, rowsRead } })
  if (signed < peerReviews) {
    change.revision += 1
    return
  }
  approve(change, now)
  await addEvent(em, change, { kind: 'approved', person, at: now })
}
