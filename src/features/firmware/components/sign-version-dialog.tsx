import { useState } from 'react'
import type { FirmwareVersionView } from '../../../../shared/contract/firmware.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useSignVersion } from '../mutations.ts'

/** Publishes a draft, or retires a published version: the password re-entered over the schema and the firmware image that were read. */
export function SignVersionDialog({ version, what, onClose }: { version: FirmwareVersionView; what: 'publish' | 'retire'; onClose: () => void }) {
  const sign = useSignVersion(version.line, version.version, what)
  const [password, setPassword] = useState('')
  const [typed, setTyped] = useState('')
  const name = `${version.line} ${version.version}`
  const missing = what === 'retire' && typed.trim() !== name ? `Write "${name}" first.` : password === '' ? 'Write your password first.' : null
  return (
    <Dialog
      open
      onClose={onClose}
      busy={sign.isPending}
      title={what === 'publish' ? `Publish ${name}` : `Retire ${name}`}
      actions={
        <>
          <Button kind={what === 'publish' ? 'primary' : 'danger'} unavailable={missing} pending={sign.isPending} onClick={() => sign.mutate({ password, schemaHash: version.schemaHash, imageHash: version.firmwareImage?.sha256 ?? null }, { onSuccess: onClose })}>
            {what === 'publish' ? 'Sign and publish' : 'Sign and retire'}
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <p>
        {what === 'publish'
          ? 'From then on its schema is never edited, and changes can move joints to it. You count as an author of those changes.'
          : 'No change can move a joint to it any more. Releases that hold it stay as they are.'}
      </p>
      <KeyValueList
        entries={[
          { key: 'schema', value: <Hash hash={version.schemaHash} /> },
          { key: 'firmware', value: version.firmwareImage ? <Hash hash={version.firmwareImage.sha256} /> : 'no image was uploaded' },
        ]}
      />
      {what === 'retire' && <TextField label="Write the name of the version" help={<span className="num">{name}</span>} mono autoComplete="off" spellCheck={false} value={typed} onChange={setTyped} />}
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(sign.error, '/password')} />
      <ProblemPanel problem={sign.error} shown={['/password']} />
    </Dialog>
  )
}
