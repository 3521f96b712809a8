import { useState } from 'react'
import type { ReactNode } from 'react'
import { statements } from '../../../../shared/contract/reviews.ts'
import { fieldError } from '../../../lib/api-client.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Checkbox } from '../../../components/ui/checkbox.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { SignsAs } from './signs-as.tsx'

export interface SignPeerReviewProps {
  onSign: (password: string) => void
  pending: boolean
  problem: unknown
  /** what has to be done before, in words; null when nothing */
  blocked: string | null
  /** the signer's printed name */
  signer: string
  /** the way back for the change */
  other: ReactNode
}

/** Signs the peer review: the statement, the password again. The password is let go of when it was refused. */
export function SignPeerReviewForm({ onSign, pending, problem, blocked, signer, other }: SignPeerReviewProps) {
  const [stated, setStated] = useState(false)
  const [password, setPassword] = useState('')
  const missing = blocked ?? (!stated ? 'State what you sign first.' : password === '' ? 'Enter your password first.' : null)
  return (
    <form
      className="ml-[30px] grid gap-3"
      onSubmit={(event) => {
        event.preventDefault()
        if (missing || pending) return
        onSign(password)
        setPassword('')
      }}
    >
      <SignsAs signer={signer} meaning="peer review" blocked={blocked} />
      <Checkbox label={statements['peer review']} checked={stated} onChange={setStated} />
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(problem, '/password')} />
      <div className="flex flex-wrap gap-2">
        <Button type="submit" kind="primary" unavailable={missing} pending={pending}>
          Sign the peer review
        </Button>
        {other}
      </div>
      <ProblemPanel problem={problem} shown={['/password']} />
    </form>
  )
}
