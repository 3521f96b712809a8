import type { EntityManager } from '@mikro-orm/core'
import type { Marked } from '../../../shared/contract/reviews.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { inState } from '../changes/permissions.ts'
import { setOf } from '../changes/read-set.ts'
import { openComments } from '../comments/open-comments.ts'
import { firmwareAuthors } from '../firmware/firmware-authors.ts'
import { reentered } from '../people/check-credentials.ts'
import type { Person } from '../people/person.entity.ts'
import { concessionProblems } from '../policy/concession-rules.ts'
import { policyInForce } from '../policy/policy-in-force.ts'
import { unreadBy } from './reading.ts'
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

const named = (row: Marked & { title?: string; field?: string; joint?: string }) => row.title ?? row.field ?? row.joint ?? row.key

/**
 * What must hold before a signature: every row of what alters read by the signer, as it stands now; every comment marked answered; every concession
 * within the policy in force, which may have been tightened since the change was submitted.
 *
 * @returns rows read
 * @throws DomainError wrong-state, with the count and the names of what is open
 */
export async function mustBeReady(em: EntityManager, change: Change, person: Person, now: Date): Promise<number> {
  const open = inState(change, 'submitted', 'approved')
  if (!open.allowed) throw new DomainError('wrong-state', `${open.why} There is nothing to sign. Nothing was done.`)
  const { unread, diff } = await unreadBy(em, change, person)
  const { rows } = diff.counts
  if (unread.length > 0)
    throw new DomainError('wrong-state', `You have not marked ${unread.length} of ${rows} ${rows === 1 ? 'row' : 'rows'} as read. Nothing was signed; read what alters, mark it, then sign.`, {
      fields: unread.slice(0, 50).map((r) => ({ pointer: r.pointer, detail: `${named(r)} is not marked as read` })),
      extra: { unread: unread.length, rows },
    })
  const comments = await openComments(em, change)
  if (comments.length > 0)
    throw new DomainError('wrong-state', `${comments.length === 1 ? 'One comment is' : `${comments.length} comments are`} not answered: ${comments.slice(0, 5).map((c) => `${c.number}, ${c.personName}${c.about ? ` on ${c.about}` : ''}`).join('; ')}${comments.length > 5 ? '; and more' : ''}. Nothing was signed; who wrote a comment or a reviewer marks it answered.`, {
      fields: comments.slice(0, 50).map((c) => ({ pointer: '', detail: `comment ${c.number} by ${c.personName} is not answered` })),
      extra: { comments: comments.map((c) => c.number) },
    })
  const beyond = concessionProblems(change.concessions, (await policyInForce(em, change.machine)).content, now)
  if (beyond.length > 0) throw new DomainError('wrong-state', `${beyond[0].detail}. Nothing was signed; return the change, so that its concession is asked for again.`, { fields: beyond })
  return rows
}

/**
 * The password re-entered for a signature; slow, so it stands before the transaction.
 *
 * @throws DomainError wrong-password, which goes into the ledger
 */
export async function mustReenter(em: EntityManager, person: Person, password: string): Promise<void> {
  if (!(await reentered(em, person, password))) throw new DomainError('wrong-password', 'The password is not yours. Nothing was signed; type it again.', { fields: [{ pointer: '/password', detail: 'is not the password you sign in with' }], recorded: true })
}
