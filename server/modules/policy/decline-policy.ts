import type { EntityManager } from '@mikro-orm/core'
import { appendEntry } from '../ledger/append-entry.ts'
import { queueMail } from '../mail/queue-mail.ts'
import type { Person } from '../people/person.entity.ts'
import { freshVersion } from './find-policy.ts'
import { decline, type PolicyVersion } from './policy-version.entity.ts'

/** Declines a proposed policy, with the reason; its author may take it back so. @throws DomainError wrong-state */
export async function declinePolicy(em: EntityManager, { version: { id }, reason, person, now }: { version: PolicyVersion; reason: string; person: Person; now: Date }): Promise<PolicyVersion> {
  const version = await freshVersion(em, { id } as PolicyVersion)
  decline(version, now)
  const { machine, author } = version
  if (author && author.id !== person.id) queueMail(em, { person: author, topic: 'policy', subject: `Policy of ${machine.name}: version ${version.number} was declined`, text: [`${author.name},`, '', `${person.name} declined version ${version.number} of the policy of ${machine.name}:`, '', reason.trim(), '', 'Detent'].join('\n'), now })
  await appendEntry(em, { at: now, person, act: 'policy declined', subject: { machine: machine.key, policy: version.number }, details: { reason: reason.trim(), author: author?.name ?? null } })
  return version
}
