import type { EntityManager } from '@mikro-orm/core'
import { policyStatement } from '../../../shared/contract/policy.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import type { Person } from '../people/person.entity.ts'
import { freshVersion } from './find-policy.ts'
import { sign, type PolicyVersion } from './policy-version.entity.ts'

/** @throws DomainError own-work, recorded */
export function mustNotBeAuthor(version: PolicyVersion, person: Person) {
  if (version.author?.id === person.id) throw new DomainError('own-work', `You proposed version ${version.number} of the policy: another release manager signs it. Nothing was signed.`, { recorded: true })
}

/**
 * Puts a proposed policy in force, by the signature of a release manager who did not propose it and re-entered their password.
 *
 * @throws DomainError own-work; wrong-state when it does not wait for a signature any more
 */
export async function signPolicy(em: EntityManager, { version: { id }, person, now }: { version: PolicyVersion; person: Person; now: Date }): Promise<PolicyVersion> {
  const version = await freshVersion(em, { id } as PolicyVersion)
  mustNotBeAuthor(version, person)
  sign(version, person, now)
  const { machine, author } = version
  if (author) queueMail(em, { person: author, topic: 'policy', subject: `Policy of ${machine.name}: version ${version.number} is in force`, text: [`${author.name},`, '', `${person.name} signed version ${version.number} of the policy of ${machine.name}; it is in force. Checks made under the version before it are stale.`, '', 'Detent'].join('\n'), now })
  await appendEntry(em, { at: now, person, act: 'policy signed', subject: { machine: machine.key, policy: version.number }, details: { statement: policyStatement, author: author?.name ?? null, content: version.content } })
  return version
}
