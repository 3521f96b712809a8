import { useState } from 'react'
import type { PolicyView } from '../../../../shared/contract/policy.ts'
import { policyStatement } from '../../../../shared/contract/policy.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useDeclinePolicy, useSignPolicy } from '../mutations.ts'

export function SignPolicyDialog({ policy, onClose }: { policy: PolicyView; onClose: () => void }) {
  const sign = useSignPolicy(policy.machine, policy.number)
  const [password, setPassword] = useState('')
  return (
    <Dialog
      open
      onClose={onClose}
      busy={sign.isPending}
      title={`Sign policy ${policy.number}`}
      actions={
        <>
          <Button kind="primary" unavailable={password === '' ? 'Write your password first.' : null} pending={sign.isPending} onClick={() => sign.mutate(password, { onSuccess: onClose })}>
            Sign and put in force
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <p>“{policyStatement}”</p>
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(sign.error, '/password')} />
      <ProblemPanel problem={sign.error} shown={['/password']} />
    </Dialog>
  )
}

export function DeclinePolicyDialog({ policy, onClose }: { policy: PolicyView; onClose: () => void }) {
  const decline = useDeclinePolicy(policy.machine, policy.number)
  const [reason, setReason] = useState('')
  return (
    <Dialog
      open
      onClose={onClose}
      busy={decline.isPending}
      title={`Decline policy ${policy.number}`}
      actions={
        <>
          <Button kind="danger" unavailable={reason.trim() === '' ? 'Write the reason first.' : null} pending={decline.isPending} onClick={() => decline.mutate(reason.trim(), { onSuccess: onClose })}>
            Decline
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <p>The policy in force stays. The proposal stays readable, with your reason.</p>
      <TextArea label="Reason" value={reason} onChange={setReason} maxLength={2000} error={fieldError(decline.error, '/reason')} />
      <ProblemPanel problem={decline.error} shown={['/reason']} />
    </Dialog>
  )
}
