import { useState } from 'react'
import type { ReactNode } from 'react'
import type { VersionProposal } from '../../../../shared/contract/releases.ts'
import { statements } from '../../../../shared/contract/reviews.ts'
import { fieldError } from '../../../lib/api-client.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Checkbox } from '../../../components/ui/checkbox.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { SignsAs } from './signs-as.tsx'
import { isLower, partsOf, stepBetween } from '../version-step.ts'

export interface SignReleaseProps {
  machineName: string
  /** version of the newest release; null before the first */
  baseVersion: string | null
  proposal: VersionProposal
  joints: number
  onSign: (signed: { password: string; version: string; stepReason?: string }) => void
  pending: boolean
  problem: unknown
  /** what has to be done before, in words; null when nothing */
  blocked: string | null
  /** the signer's printed name */
  signer: string
  other: ReactNode
}

/** Signs the release: version with the step proposed, a reason for a lower one, the statement, the password again. */
export function SignReleaseForm({ machineName, baseVersion, proposal, joints, onSign, pending, problem, blocked, signer, other }: SignReleaseProps) {
  const [typed, setTyped] = useState<string | null>(null)
  const [stepReason, setStepReason] = useState('')
  const [stated, setStated] = useState(false)
  const [password, setPassword] = useState('')
  const version = (typed ?? proposal.version).trim()
  const step = baseVersion === null ? null : stepBetween(baseVersion, version)
  const lower = step !== null && isLower(step, proposal.step)
  const versionError = partsOf(version) === null ? 'A version has the form 1.2.3.' : baseVersion !== null && step === null ? `It must come after ${baseVersion}.` : fieldError(problem, '/version')
  const missing = versionError ?? blocked ?? (lower && stepReason.trim() === '' ? `A ${step} step needs a reason: ${proposal.step} is proposed.` : !stated ? 'State what you sign first.' : password === '' ? 'Enter your password first.' : null)
  return (
    <form
      className="ml-[30px] grid gap-3"
      onSubmit={(event) => {
        event.preventDefault()
        if (missing || pending) return
        onSign({ password, version, ...(lower ? { stepReason: stepReason.trim() } : {}) })
        setPassword('')
      }}
    >
      <TextField label={`Version of ${machineName}`} mono width={120} value={typed ?? proposal.version} onChange={setTyped} error={versionError} help={<>{proposal.step}: {proposal.because.join('; ')}. Lower needs a reason.</>} />
      {lower && <TextArea label={`Reason for a ${step} step`} value={stepReason} onChange={setStepReason} maxLength={2000} rows={2} error={fieldError(problem, '/stepReason')} />}
      <SignsAs signer={signer} meaning="release" blocked={blocked} />
      <Checkbox label={statements.release} checked={stated} onChange={setStated} />
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(problem, '/password')} />
      <div className="flex flex-wrap gap-2">
        <Button type="submit" kind="primary" unavailable={missing} pending={pending}>
          Sign and release {version}
        </Button>
        {other}
      </div>
      <p className="text-13 text-ink-2">Writes the revisions of {joints === 1 ? 'one joint' : `${joints} joints`} and the release in one step, or nothing.</p>
      <ProblemPanel problem={problem} shown={['/password', '/version', '/stepReason']} />
    </form>
  )
}
