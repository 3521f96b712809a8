import type { EntityManager } from '@mikro-orm/core'
import type { CheckResult } from '../../../shared/contract/checks.ts'
import type { PolicyContent } from '../../../shared/contract/policy.ts'
import { DomainError, type FieldProblem } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { checkChange } from '../checks/check-change.ts'
import { gatherInputs } from '../checks/gather-inputs.ts'
import { inputsHash } from '../checks/inputs-hash.ts'
import { newestRelease } from '../machines/current-release.ts'
import type { HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { concessionProblems } from '../policy/concession-rules.ts'
import { mayPropose } from '../policy/may-propose.ts'
import { policyInForce } from '../policy/policy-in-force.ts'
import { proposalFor } from '../releases/release-change.ts'
import { contentOf, type Content } from '../reviews/content-of.ts'
import { addEvent } from './add-event.ts'
import { submit, type Change } from './change.entity.ts'
import { mustWrite } from './save-draft.ts'

/** Everything that stands between a draft and its submission, at once. @throws DomainError check-blocks, content-invalid */
function mustBeReady(change: Change, check: CheckResult, policy: PolicyContent, now: Date) {
  const blocks = check.findings.filter((f) => f.level === 'block')
  if (blocks.length > 0)
    throw new DomainError('check-blocks', `${blocks.length === 1 ? 'One finding blocks' : `${blocks.length} findings block`} this change. It stays a draft with everything in it; ${blocks.length === 1 ? 'mend what it names' : 'mend what they name'} and submit again.`, {
      fields: blocks.map((f) => ({ pointer: f.pointer ?? '', detail: `${f.text} ${f.remedy}`.trim() })),
      extra: { findings: blocks },
    })
  const missing: FieldProblem[] = []
  if (change.reason.trim() === '') missing.push({ pointer: '/reason', detail: 'write down why: the people who sign read it first' })
  const asked = new Set(change.concessions.map((c) => c.finding))
  for (const f of check.findings) if (f.level === 'concession needed' && !asked.has(f.key)) missing.push({ pointer: '/concessions', detail: `${f.kind}: ${f.text} Request a concession or mend it.` })
  missing.push(...concessionProblems(change.concessions, policy, now))
  if (!check.joints.some((j) => j.touched)) missing.push({ pointer: '', detail: 'nothing differs from the base release' })
  if (missing.length > 0) throw new DomainError('content-invalid', 'The change is not ready to be submitted. It stays a draft with everything in it.', { fields: missing })
}

/** @throws DomainError not-permitted, recorded: policy keeps this step of version to another role */
async function mustBeProposer(em: EntityManager, change: Change, content: Content, policy: PolicyContent, held: readonly HeldRole[]) {
  const { step, version } = await proposalFor(em, change, content)
  const allowed = mayPropose(step, policy, held, change.machine.key)
  if (!allowed.allowed) throw new DomainError('not-permitted', `${allowed.why} This change steps to ${version}. It stays a draft with everything in it; have one of them submit it as a writer, or propose less.`, { recorded: true })
}

/**
 * The slow half: the check and the content hash, before any transaction.
 *
 * @throws DomainError base-outdated, check-blocks, content-invalid, not-permitted
 */
export async function prepareSubmission(services: Services, em: EntityManager, change: Change, { held, now }: { held: readonly HeldRole[]; now: Date }): Promise<{ hash: string; inputs: string }> {
  const newest = await newestRelease(em, change.machine)
  if (newest && newest.id !== change.baseRelease?.id)
    throw new DomainError('base-outdated', `Release ${newest.version} came meanwhile. The draft is kept; bring it up to date, then submit.`)
  const { result } = await checkChange(services, em, change)
  const policy = (await policyInForce(em, change.machine)).content
  mustBeReady(change, result, policy, now)
  const content = await contentOf(em, change, result)
  await mustBeProposer(em, change, content, policy, held)
  return { hash: content.hash, inputs: result.inputsHash }
}

/** Freezes a draft for review. Its content was checked as it stands; anything that moved since refuses the act. */
export async function submitChange(em: EntityManager, change: Change, prepared: { hash: string; inputs: string }, { person, now }: { person: Person; now: Date }): Promise<void> {
  mustWrite(change, person)
  if (inputsHash(await gatherInputs(em, change)) !== prepared.inputs) throw new DomainError('check-stale', 'The draft or its policy moved while it was checked. Nothing was submitted; read the check again and submit.')
  submit(change, prepared.hash, now)
  await addEvent(em, change, { kind: 'submitted', person, at: now, details: { contentHash: prepared.hash } })
}
