import { useState } from 'react'
import type { FirmwareLineView } from '../../../../shared/contract/firmware.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useDescribeLine, useMakeLine } from '../mutations.ts'

/** Makes a firmware line, or describes one anew. */
export function LineDialog({ line, onClose }: { line?: FirmwareLineView; onClose: () => void }) {
  const make = useMakeLine()
  const describe = useDescribeLine(line?.key ?? '')
  const [key, setKey] = useState('')
  const [name, setName] = useState(line?.name ?? '')
  const [description, setDescription] = useState(line?.description ?? '')
  const { error, isPending } = line ? describe : make
  const missing = !line && key.trim() === '' ? 'Write a key first.' : name.trim() === '' ? 'Write a name first.' : null
  const save = () => {
    const words = { name: name.trim(), description: description.trim() }
    if (line) describe.mutate(words, { onSuccess: onClose })
    else make.mutate({ key: key.trim(), ...words }, { onSuccess: onClose })
  }
  return (
    <Dialog
      open
      onClose={onClose}
      busy={isPending}
      title={line ? `Describe ${line.name}` : 'New firmware line'}
      actions={
        <>
          <Button kind="primary" unavailable={missing} pending={isPending} onClick={save}>
            {line ? 'Save' : 'Make the line'}
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      {!line && <TextField label="Key" mono value={key} onChange={setKey} maxLength={39} spellCheck={false} error={fieldError(error, '/key')} help="stands in documents before the version, as in “hinge 2.1.0”; lower-case letters, digits and hyphens; it stays" />}
      <TextField label="Name" value={name} onChange={setName} maxLength={80} error={fieldError(error, '/name')} />
      <TextArea label="Description" help="which board it runs on" value={description} onChange={setDescription} maxLength={400} rows={2} error={fieldError(error, '/description')} />
      <ProblemPanel problem={error} shown={['/key', '/name', '/description']} />
    </Dialog>
  )
}
