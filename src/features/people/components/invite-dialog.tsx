import { useState } from 'react'
import type { PersonView, RoleGrantRequest } from '../../../../shared/contract/people.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useInvite } from '../mutations.ts'
import { RolePicker } from './role-picker.tsx'

export function InviteDialog({ machines, onClose, onInvited }: { machines: readonly { key: string; name: string }[]; onClose: () => void; onInvited: (person: PersonView) => void }) {
  const invite = useInvite()
  const [name, setName] = useState('')
  const [email, setEmail] = useState('')
  const [asked, setAsked] = useState<RoleGrantRequest[]>([{ role: 'observer', machine: null }])
  const missing = name.trim() === '' ? 'Write the name first.' : email.trim() === '' ? 'Write the e-mail address first.' : null
  return (
    <Dialog
      open
      onClose={onClose}
      busy={invite.isPending}
      title="Invite a person"
      actions={
        <>
          <Button kind="primary" unavailable={missing} pending={invite.isPending} onClick={() => invite.mutate({ name: name.trim(), email: email.trim(), roles: asked }, { onSuccess: onInvited })}>
            Send the invitation
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <TextField label="Name" autoComplete="off" value={name} onChange={setName} maxLength={120} error={fieldError(invite.error, '/name')} />
      <TextField label="E-mail" type="email" autoComplete="off" value={email} onChange={setEmail} error={fieldError(invite.error, '/email')} help="a link that sets the password goes there; it works once" />
      {asked.map((role, i) => (
        <div key={i} className="border-l-2 border-hairline pl-3">
          <RolePicker
            value={role}
            machines={machines}
            onChange={(next) => setAsked(asked.map((r, j) => (j === i ? next : r)))}
            roleError={fieldError(invite.error, `/roles/${i}/role`)}
            machineError={fieldError(invite.error, `/roles/${i}/machine`)}
          />
          <Button kind="link" small className="-ml-2" onClick={() => setAsked(asked.filter((_, j) => j !== i))}>
            take this role away
          </Button>
        </div>
      ))}
      <div>
        <Button small onClick={() => setAsked([...asked, { role: 'observer', machine: null }])}>
          One more role
        </Button>
      </div>
      <ProblemPanel problem={invite.error} shown={['/name', '/email', ...asked.flatMap((_, i) => [`/roles/${i}/role`, `/roles/${i}/machine`])]} />
    </Dialog>
  )
}
