import type { EntityManager } from '@mikro-orm/core'
import type { CheckResult } from '../../../shared/contract/checks.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Person } from '../people/person.entity.ts'
import { remove, stateOf, type Evidence } from './evidence.entity.ts'
import { subjectOf } from './locate.ts'
import { mayRemove } from './may-remove.ts'
import { renewContent } from './renew-content.ts'

/**
 * Takes a log away from its joint or change. Its name and hash stay in the ledger, its bytes in the store.
 *
 * @throws DomainError wrong-state, not-permitted
 */
export async function removeEvidence(em: EntityManager, evidence: Evidence, { check, person, now }: { check: CheckResult | null; person: Person; now: Date }): Promise<void> {
  const answer = await mayRemove(em, evidence, person)
  if (!answer.allowed) throw new DomainError('wrong-state', `${answer.why} Nothing was altered.`)
  const counted = stateOf(evidence) === 'read'
  remove(evidence, person.name, now)
  if (evidence.change && counted) await renewContent(em, evidence.change, check, now)
  await appendEntry(em, { at: now, person, act: 'evidence removed', subject: subjectOf(evidence), details: { evidence: evidence.number, name: evidence.name, sha256: evidence.sha256 } })
}
