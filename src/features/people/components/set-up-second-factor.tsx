import { useState } from 'react'
import type { SecondFactorBegun } from '../../../../shared/contract/second-factor.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { FormDialog } from '../../../components/ui/form-dialog.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useBeginSecondFactor, useConfirmSecondFactor } from '../mutations.ts'
import { CodeField } from './code-field.tsx'

/** Password, then the secret and a first code. `onDone` gets the recovery codes. */
export function SetUpSecondFactor({ onDone, onClose }: { onDone: (codes: string[] | null) => void; onClose: () => void }) {
  const begin = useBeginSecondFactor()
  const [password, setPassword] = useState('')
  if (begin.data) return <ConfirmStep begun={begin.data} onDone={onDone} onClose={onClose} />
  const send = () => begin.mutate(password, { onError: () => setPassword('') })
  return (
    <FormDialog title="Set up a second factor" act="Go on" missing={password === '' ? 'Write your password first.' : null} pending={begin.isPending} onSend={send} onClose={onClose} leave="Not now">
      <p>An authenticator app on your phone, or in your password store, then shows a code that Detent asks for when you sign in.</p>
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(begin.error, '/password')} />
      <ProblemPanel problem={begin.error} shown={['/password']} />
    </FormDialog>
  )
}

function ConfirmStep({ begun, onDone, onClose }: { begun: SecondFactorBegun; onDone: (codes: string[] | null) => void; onClose: () => void }) {
  const confirm = useConfirmSecondFactor()
  const [code, setCode] = useState('')
  const send = () => confirm.mutate(code.trim(), { onSuccess: ({ recoveryCodes }) => onDone(recoveryCodes), onError: () => setCode('') })
  return (
    <FormDialog title="Set up a second factor" act="Set it up" missing={code.trim() === '' ? 'Enter the code first.' : null} pending={confirm.isPending} onSend={send} onClose={onClose} leave="Not now">
      <p>Let the app read the picture, or type the secret into it. Then enter the code that it shows.</p>
      {/* Black on white in both themes: cameras read it so. */}
      <img className="h-[200px] w-[200px] border border-rule bg-white" alt="QR code of the secret below" src={`data:image/svg+xml;charset=utf-8,${encodeURIComponent(begun.picture)}`} />
      <div>
        <span className="label" id="secret-label">Secret</span>
        <output aria-labelledby="secret-label" className="num block rounded-[3px] border border-ink bg-brass-wash px-3 py-2 text-13 select-all">
          {begun.secret}
        </output>
        <p className="help">time based, six digits, 30 s; shown this once</p>
      </div>
      <CodeField appOnly value={code} onChange={setCode} error={fieldError(confirm.error, '/code')} />
      <ProblemPanel problem={confirm.error} shown={['/code']} />
    </FormDialog>
  )
}
