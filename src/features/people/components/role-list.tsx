import type { ReactNode } from 'react'
import type { GrantView } from '../../../../shared/contract/people.ts'

export interface RoleListProps {
  roles: readonly GrantView[]
  /** Name of a machine by its key. */
  machineName: (key: string) => string
  /** After each role, as a button that ends it. */
  after?: (grant: GrantView) => ReactNode
}

/** Roles a person holds, each with where it holds and whether it waits. */
export function RoleList({ roles, machineName, after }: RoleListProps) {
  if (roles.length === 0) return <p className="py-2 text-ink-2">No role.</p>
  return (
    <ul>
      {roles.map((grant) => (
        <li key={grant.id} className="flex min-h-[38px] flex-wrap items-center gap-x-3 border-b border-hairline py-1 last:border-rule">
          <span className="font-medium">{grant.role}</span>
          <span className="text-13 text-ink-2">on {grant.machine === null ? 'all machines' : machineName(grant.machine)}</span>
          {!grant.confirmed && <span className="text-13 text-plum">waits for another signer's confirmation</span>}
          <span className="ml-auto">{after?.(grant)}</span>
        </li>
      ))}
    </ul>
  )
}
