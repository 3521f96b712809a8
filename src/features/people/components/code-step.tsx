import { useState } from 'react'
import type { Me } from '../../../../shared/contract/people.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useEnterSignInCode } from '../mutations.ts'
import { CodeField } from './code-field.tsx'

/** The second step of signing in: the password was right, the code comes next. */
export function CodeStep({ email, onSignedIn, onBack }: { email: string; onSignedIn: (me: Me) => void; onBack: () => void }) {
  const enter = useEnterSignInCode()
  const [code, setCode] = useState('')
  const [missing, setMissing] = useState(false)
  return (
    <form
      noValidate
      className="grid gap-3"
      onSubmit={(event) => {
        event.preventDefault()
        setMissing(code.trim() === '')
        if (code.trim() === '' || enter.isPending) return
        enter.mutate(code.trim(), { onSuccess: onSignedIn, onError: () => setCode('') })
      }}
    >
      <p className="text-13 text-ink-2">as {email}; the password was right</p>
      <CodeField autoFocus value={code} onChange={setCode} error={missing ? 'Enter the code that your app shows.' : fieldError(enter.error, '/code')} />
      <ProblemPanel problem={enter.error} shown={['/code']} />
      <div className="mt-1 flex flex-wrap items-center gap-4">
        <Button type="submit" kind="primary" pending={enter.isPending}>
          Sign in
        </Button>
        <Button kind="link" onClick={onBack}>
          Sign in as another person
        </Button>
      </div>
    </form>
  )
}
