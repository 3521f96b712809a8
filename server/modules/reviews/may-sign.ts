import type { EntityManager } from '@mikro-orm/core'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { firmwareAuthors } from '../firmware/firmware-authors.ts'
import { reentered } from '../people/check-credentials.ts'
import type { Person } from '../people/person.entity.ts'
import { Signature } from './signature.entity.ts'

/** Firmware versions that the change moves joints to. */
function firmwareMovedTo(change: Change): string[] {
  const base = change.baseRelease?.set ?? emptySet()
  const moved = Object.entries(setOf(change.text).joints).filter(([key, joint]) => base.joints[key]?.firmware !== joint.firmware)
  return [...new Set(moved.map(([, joint]) => joint.firmware))]
}

/**
 * The two-person rule for one signature: nobody who wrote in the change, wrote or published a firmware version it moves a joint to, or
 * signed it already. Each refusal goes into the ledger.
 *
 * @throws DomainError own-work
 */
export async function mustBeAnother(em: EntityManager, change: Change, person: Person): Promise<void> {
  const refuse = (why: string) => new DomainError('own-work', `${why} Nothing was signed.`, { recorded: true })
  if (change.writers.includes(person.id)) throw refuse('You wrote in this change; two other people sign it.')
  if ((await firmwareAuthors(em, firmwareMovedTo(change))).includes(person.id)) throw refuse('You wrote or published a firmware version that this change moves a joint to, and so count as one of its authors.')
  if ((await em.count(Signature, { change, round: change.round, person })) > 0) throw refuse('You signed this change already; another person signs next.')
}

/**
 * The password re-entered for a signature; slow, so it stands before the transaction.
 *
 * @throws DomainError wrong-password, which goes into the ledger
 */
export async function mustReenter(em: EntityManager, person: Person, password: string): Promise<void> {
  if (!(await reentered(em, person, password))) throw new DomainError('wrong-password', 'The password is not yours. Nothing was signed; type it again.', { fields: [{ pointer: '/password', detail: 'is not the password you sign in with' }], recorded: true })
}
