import { useState } from 'react'
import type { GrantView, PersonView } from '../../../../shared/contract/people.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ConfirmByName } from '../../../components/ui/confirm-by-name.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { useEndRole } from '../mutations.ts'
import { GrantRoleDialog } from './grant-role-dialog.tsx'
import { RoleList } from './role-list.tsx'

export function PersonRoles({ person, machines }: { person: PersonView; machines: readonly { key: string; name: string; retired: boolean }[] }) {
  const end = useEndRole(person.id)
  const [granting, setGranting] = useState(false)
  const [ending, setEnding] = useState<GrantView | null>(null)
  return (
    <section aria-labelledby="roles">
      <SectionHeading
        id="roles"
        actions={
          person.may.grantRoles.allowed && (
            <Button small onClick={() => setGranting(true)}>
              Grant a role…
            </Button>
          )
        }
      >
        Roles
      </SectionHeading>
      <RoleList
        roles={person.roles}
        machineName={(key) => machines.find((m) => m.key === key)?.name ?? key}
        after={(grant) =>
          person.may.endRoles.allowed && (
            <Button small kind="danger" aria-label={`End the role ${grant.role}…`} onClick={() => setEnding(grant)}>
              End…
            </Button>
          )
        }
      />
      {granting && <GrantRoleDialog person={person} machines={machines.filter((m) => !m.retired)} onClose={() => setGranting(false)} />}
      <ConfirmByName
        open={ending !== null}
        onClose={() => setEnding(null)}
        title={`End ${person.name}'s role`}
        name={ending?.role ?? ''}
        noun="role"
        act="End the role"
        pending={end.isPending}
        onConfirm={() => ending && end.mutate(ending.id, { onSuccess: () => setEnding(null) })}
      >
        <p>{person.name} loses at once what only this role allows. Signatures already given stay.</p>
        <ProblemPanel problem={end.error} />
      </ConfirmByName>
    </section>
  )
}
