import { useState } from 'react'
import type { ReactNode } from 'react'
import type { Me } from '../../../../shared/contract/people.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { useSignIn } from '../mutations.ts'
import { CodeStep } from './code-step.tsx'

export interface SignInFormProps {
  email: string
  password: string
  onEmail: (email: string) => void
  onPassword: (password: string) => void
  /** The address is given: signing in again. */
  fixedEmail?: boolean
  onSignedIn: (me: Me) => void
  children?: ReactNode
}

export function SignInForm({ email, password, onEmail, onPassword, fixedEmail = false, onSignedIn, children }: SignInFormProps) {
  const signIn = useSignIn()
  const [missing, setMissing] = useState(false)
  const [awaited, setAwaited] = useState(false)
  if (awaited)
    return (
      <CodeStep
        email={email.trim()}
        onSignedIn={onSignedIn}
        onBack={() => {
          setAwaited(false)
          onPassword('')
        }}
      />
    )
  return (
    <form
      noValidate
      className="grid gap-3"
      onSubmit={(event) => {
        event.preventDefault()
        const complete = email.trim() !== '' && password !== ''
        setMissing(!complete)
        if (complete && !signIn.isPending) signIn.mutate({ email: email.trim(), password }, { onSuccess: (me) => (me ? onSignedIn(me) : setAwaited(true)) })
      }}
    >
      {fixedEmail ? (
        <p className="text-13 text-ink-2">as {email}</p>
      ) : (
        <TextField
          label="E-mail"
          type="email"
          autoComplete="username"
          autoCapitalize="none"
          spellCheck={false}
          value={email}
          onChange={onEmail}
          error={missing && email.trim() === '' ? 'Write your e-mail address.' : null}
        />
      )}
      <PasswordField label="Password" purpose="present" value={password} onChange={onPassword} error={missing && password === '' ? 'Write your password.' : null} />
      {/* Tells a password store whose password this is; after the field that takes the focus. */}
      {fixedEmail && <input type="email" autoComplete="username" value={email} readOnly hidden />}
      <ProblemPanel problem={signIn.error} />
      <div className="mt-1 flex flex-wrap items-center gap-4">
        <Button type="submit" kind="primary" pending={signIn.isPending}>
          Sign in
        </Button>
        {children}
      </div>
    </form>
  )
}
