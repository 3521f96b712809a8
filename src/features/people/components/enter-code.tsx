import { useState } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { FormDialog } from '../../../components/ui/form-dialog.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useEnterCode } from '../mutations.ts'
import { CodeField } from './code-field.tsx'

/** Enters a code of the second factor before a signature. */
export default function EnterCode({ onClose }: { onClose: () => void }) {
  const enter = useEnterCode()
  const [code, setCode] = useState('')
  const send = () => enter.mutate(code.trim(), { onSuccess: onClose, onError: () => setCode('') })
  return (
    <FormDialog title="Enter a code before you sign" act="Enter it" missing={code.trim() === '' ? 'Enter a code first.' : null} pending={enter.isPending} onSend={send} onClose={onClose}>
      <p>This workplace asks for a code of your second factor before each signature. Nothing was signed; after this, sign again.</p>
      <CodeField value={code} onChange={setCode} error={fieldError(enter.error, '/code')} />
      <ProblemPanel problem={enter.error} shown={['/code']} />
    </FormDialog>
  )
}
