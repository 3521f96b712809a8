import { useState } from 'react'
import type { WorkplaceKeyView } from '../../../../shared/contract/keys.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useRotateKey } from '../mutations.ts'

/** Digits of the key's name that are typed again. */
const TYPED = 8

/** Signs with another key from now on: the beginning of the key's name and the password. */
export function RotateKeyDialog({ current, onClose }: { current: WorkplaceKeyView; onClose: () => void }) {
  const rotate = useRotateKey()
  const [typed, setTyped] = useState('')
  const [password, setPassword] = useState('')
  const begins = current.keyId.slice(0, TYPED)
  const missing = typed.trim().toLowerCase() !== begins ? `Write "${begins}" first.` : password === '' ? 'Write your password first.' : null
  return (
    <Dialog
      open
      onClose={onClose}
      busy={rotate.isPending}
      title="Rotate the workplace’s key"
      actions={
        <>
          <Button kind="danger" unavailable={missing} pending={rotate.isPending} onClick={() => rotate.mutate({ password, keyId: current.keyId }, { onSuccess: onClose })}>
            Rotate
          </Button>
          <Button onClick={onClose}>Keep it</Button>
        </>
      }
    >
      <p>Kits of releases made from then on are signed with a new key. Kits made before stay provable: their public keys stay on this page. Release managers and administrators are mailed; tell whoever checks kits outside Detent.</p>
      <p className="text-13">
        in use <Hash hash={current.keyId} className="[overflow-wrap:anywhere]" />
      </p>
      <TextField label="Write how the key in use begins" help={<span className="num">{begins}</span>} mono width={160} autoComplete="off" spellCheck={false} value={typed} onChange={setTyped} error={fieldError(rotate.error, '/keyId')} />
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(rotate.error, '/password')} />
      <ProblemPanel problem={rotate.error} shown={['/password', '/keyId']} />
    </Dialog>
  )
}
