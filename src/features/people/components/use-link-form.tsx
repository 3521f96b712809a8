import { useState } from 'react'
import type { LinkUsed, LinkView } from '../../../../shared/contract/people.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useLink } from '../mutations.ts'
import { newPasswordProblem } from '../password-rules.ts'
import { NewPasswordFields } from './new-password-fields.tsx'

export function UseLinkForm({ link, secret, onUsed }: { link: LinkView; secret: string; onUsed: (used: LinkUsed) => void }) {
  const use = useLink()
  const [next, setNext] = useState('')
  const [again, setAgain] = useState('')
  const [asked, setAsked] = useState(false)
  const problem = newPasswordProblem(next, again)
  return (
    <form
      noValidate
      className="grid gap-3"
      onSubmit={(event) => {
        event.preventDefault()
        setAsked(true)
        if (!problem && !use.isPending) use.mutate({ secret, password: next }, { onSuccess: onUsed })
      }}
    >
      <p>
        {link.kind === 'invitation' ? 'Welcome' : 'Set a new password'}, {link.name}. {link.kind === 'invitation' && 'Choose the password you will sign in and sign changes with. '}
        <span className="text-ink-2">The link works once, until <Time at={link.expiresAt} style="long" />.</span>
      </p>
      {/* Tells a password store whose password this is. */}
      <input type="email" autoComplete="username" value={link.email} readOnly hidden />
      <NewPasswordFields next={next} again={again} onNext={setNext} onAgain={setAgain} problem={asked ? problem : null} refused={fieldError(use.error, '/password')} />
      <ProblemPanel problem={use.error} shown={['/password']} />
      <div>
        <Button type="submit" kind="primary" pending={use.isPending}>
          Set the password
        </Button>
      </div>
    </form>
  )
}
