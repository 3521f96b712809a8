import { useState } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { count } from '../../../lib/format.ts'
import { useChangePassword } from '../mutations.ts'
import { newPasswordProblem } from '../password-rules.ts'
import { NewPasswordFields } from './new-password-fields.tsx'

export function ChangePasswordForm({ email }: { email: string }) {
  const change = useChangePassword()
  const [current, setCurrent] = useState('')
  const [next, setNext] = useState('')
  const [again, setAgain] = useState('')
  const [asked, setAsked] = useState(false)
  const problem = newPasswordProblem(next, again)
  const done = () => {
    setCurrent('')
    setNext('')
    setAgain('')
    setAsked(false)
  }
  return (
    <form
      noValidate
      className="grid max-w-[360px] gap-3"
      onSubmit={(event) => {
        event.preventDefault()
        setAsked(true)
        if (current !== '' && !problem && !change.isPending) change.mutate({ current, next }, { onSuccess: done })
      }}
    >
      <input type="email" autoComplete="username" value={email} readOnly hidden />
      <PasswordField label="Present password" purpose="present" value={current} onChange={setCurrent} error={asked && current === '' ? 'Write your present password.' : fieldError(change.error, '/current')} />
      <NewPasswordFields next={next} again={again} onNext={setNext} onAgain={setAgain} problem={asked ? problem : null} refused={fieldError(change.error, '/next')} />
      <ProblemPanel problem={change.error} shown={['/current', '/next']} />
      <div className="flex flex-wrap items-center gap-3">
        <Button type="submit" kind="primary" pending={change.isPending}>
          Change the password
        </Button>
        {change.isSuccess && !asked && (
          <span role="status" className="text-13 text-verdigris">
            changed; {count(change.data.sessionsEnded, 'other session')} ended
          </span>
        )}
      </div>
    </form>
  )
}
