import { useState } from 'react'
import type { ReactNode } from 'react'
import type { ReenterBoth } from '../../../../shared/contract/second-factor.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { FormDialog } from '../../../components/ui/form-dialog.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { CodeField } from './code-field.tsx'

export interface ReenterBothProps {
  title: string
  act: string
  danger?: boolean
  pending: boolean
  problem: unknown
  onSend: (both: ReenterBoth) => void
  onClose: () => void
  children: ReactNode
}

/** An act on the own second factor: the password and a code again. */
export function ReenterBothDialog({ title, act, danger = false, pending, problem, onSend, onClose, children }: ReenterBothProps) {
  const [password, setPassword] = useState('')
  const [code, setCode] = useState('')
  const missing = password === '' ? 'Write your password first.' : code.trim() === '' ? 'Enter a code first.' : null
  return (
    <FormDialog title={title} act={act} danger={danger} missing={missing} pending={pending} onSend={() => onSend({ password, code: code.trim() })} onClose={onClose}>
      {children}
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(problem, '/password')} />
      <CodeField value={code} onChange={setCode} error={fieldError(problem, '/code')} />
      <ProblemPanel problem={problem} shown={['/password', '/code']} />
    </FormDialog>
  )
}
