import type { EntityManager } from '@mikro-orm/core'
import { policyContradictions, type ProposePolicy } from '../../../shared/contract/policy.ts'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { queueMail } from '../mail/queue-mail.ts'
import type { Person } from '../people/person.entity.ts'
import { PolicyVersion } from './policy-version.entity.ts'
import { releaseManagersOf } from './signers.ts'

/**
 * Proposes the next version of a machine's policy. It takes effect when a release manager other than its author signs it.
 *
 * @throws DomainError content-invalid when limits contradict each other; wrong-state while another proposal waits
 */
export async function proposePolicy(em: EntityManager, { machine, request, baseUrl, person, now }: { machine: Machine; request: ProposePolicy; baseUrl: string; person: Person; now: Date }): Promise<PolicyVersion> {
  const fields = policyContradictions(request.content).map(({ pointer, detail }) => ({ pointer: `/content${pointer}`, detail }))
  if (fields.length > 0) throw new DomainError('content-invalid', 'The limits contradict each other. Nothing was proposed; correct what is named and propose again.', { fields })
  const [last] = await em.find(PolicyVersion, { machine }, { orderBy: { number: 'desc' }, limit: 1, refresh: true })
  const open = await em.findOne(PolicyVersion, { machine, signedAt: null, declinedAt: null })
  if (open) throw new DomainError('wrong-state', `Version ${open.number} of the policy waits for a signature. Nothing was proposed; have it signed or declined first.`)
  const version = em.create(PolicyVersion, { machine, number: (last?.number ?? 0) + 1, content: request.content, reason: request.reason.trim(), author: person, proposedAt: now, signedAt: null, declinedAt: null })
  for (const manager of await releaseManagersOf(em, machine, person))
    queueMail(em, { person: manager, topic: 'policy', subject: `Policy of ${machine.name}: version ${version.number} waits for a signature`, text: [`${manager.name},`, '', `${person.name} proposes version ${version.number} of the policy of ${machine.name}:`, '', version.reason, '', `Read it and sign or decline it at ${baseUrl}/policy?machine=${machine.key}`, '', 'Detent'].join('\n'), now })
  await em.flush()
  await appendEntry(em, { at: now, person, act: 'policy proposed', subject: { machine: machine.key, policy: version.number }, details: { reason: version.reason, content: version.content } })
  return version
}
