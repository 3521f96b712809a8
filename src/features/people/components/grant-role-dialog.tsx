import { useState } from 'react'
import type { PersonView, RoleGrantRequest } from '../../../../shared/contract/people.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useGrantRole } from '../mutations.ts'
import { RolePicker } from './role-picker.tsx'

export function GrantRoleDialog({ person, machines, onClose }: { person: PersonView; machines: readonly { key: string; name: string }[]; onClose: () => void }) {
  const grant = useGrantRole(person.id)
  const [asked, setAsked] = useState<RoleGrantRequest>({ role: 'observer', machine: null })
  return (
    <Dialog
      open
      onClose={onClose}
      busy={grant.isPending}
      title={`Grant ${person.name} a role`}
      actions={
        <>
          <Button kind="primary" pending={grant.isPending} onClick={() => grant.mutate(asked, { onSuccess: onClose })}>
            Grant it
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <RolePicker value={asked} onChange={setAsked} machines={machines} roleError={fieldError(grant.error, '/role')} machineError={fieldError(grant.error, '/machine')} />
      <ProblemPanel problem={grant.error} shown={['/role', '/machine']} />
    </Dialog>
  )
}
