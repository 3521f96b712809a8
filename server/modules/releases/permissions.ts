import type { Allowed } from '../../../shared/contract/people.ts'
import type { ReleaseSummary } from '../../../shared/contract/releases.ts'
import { may, type HeldRole } from '../people/permissions.ts'

/** Withdrawn releases are fetched by a release manager only, for analysis. */
export function mayDownload(machine: string, held: readonly HeldRole[], state: ReleaseSummary['state']): Allowed {
  const role = may(held, 'download', machine)
  if (!role.allowed || state !== 'withdrawn') return role
  return may(held, 'withdraw', machine).allowed ? role : { allowed: false, why: 'This release is withdrawn: it must not be flashed. A release manager may fetch it for analysis.' }
}

export function mayWithdraw(machine: string, held: readonly HeldRole[], state: ReleaseSummary['state']): Allowed {
  return state === 'withdrawn' ? { allowed: false, why: 'It is withdrawn already.' } : may(held, 'withdraw', machine)
}
