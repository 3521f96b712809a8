import type { Allowed } from '../../../shared/contract/people.ts'
import type { PolicyContent } from '../../../shared/contract/policy.ts'
import type { VersionStep } from '../../../shared/contract/releases.ts'
import type { HeldRole } from '../people/permissions.ts'

const article = (step: VersionStep) => (step === 'patch' ? 'a patch' : `a ${step} version`)

/** Whether policy lets a person with these roles submit a change of a machine that steps this far. */
export function mayPropose(step: VersionStep, { mayPropose: rules }: Pick<PolicyContent, 'mayPropose'>, held: readonly HeldRole[], machine: string): Allowed {
  const role = rules?.[step] ?? 'controls engineer'
  if (role === 'controls engineer' || held.some((h) => h.role === role && (h.machine === null || h.machine === machine))) return { allowed: true }
  return { allowed: false, why: `Policy lets only a ${role} propose ${article(step)}.` }
}
