import { useState } from 'react'
import type { ReactNode } from 'react'
import type { ReenterBoth } from '../../../../shared/contract/second-factor.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
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
  const send = () => onSend({ password, code: code.trim() })
  return (
    <Dialog
      open
      onClose={onClose}
      busy={pending}
      title={title}
      actions={
        <>
          <Button kind={danger ? 'danger' : 'primary'} unavailable={missing} pending={pending} onClick={send}>
            {act}
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <form
        noValidate
        className="grid gap-3"
        onSubmit={(event) => {
          event.preventDefault()
          if (missing === null && !pending) send()
        }}
      >
        {children}
        <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(problem, '/password')} />
        <CodeField value={code} onChange={setCode} error={fieldError(problem, '/code')} />
        <ProblemPanel problem={problem} shown={['/password', '/code']} />
        {/* Enter in a field sends the form; the buttons stand below it. */}
        <button type="submit" hidden />
      </form>
    </Dialog>
  )
}
