import { useState } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useMakeMachine } from '../mutations.ts'

/** "Mud-flat walker Mk II" to "mud-flat-walker-mk-ii". */
const keyOf = (name: string) => name.toLowerCase().normalize('NFD').replaceAll(/[^a-z0-9]+/g, '-').replaceAll(/^-+|-+$/g, '').slice(0, 40)

export function MakeMachineDialog({ onClose, onMade }: { onClose: () => void; onMade: (key: string) => void }) {
  const make = useMakeMachine()
  const [name, setName] = useState('')
  const [ownKey, setOwnKey] = useState<string | null>(null)
  const [description, setDescription] = useState('')
  const key = ownKey ?? keyOf(name)
  const missing = name.trim() === '' ? 'Write a name first.' : key === '' ? 'Write a key first.' : null
  const submit = () => missing === null && !make.isPending && make.mutate({ name: name.trim(), key, description: description.trim() }, { onSuccess: (made) => onMade(made.key) })
  return (
    <Dialog
      open
      onClose={onClose}
      busy={make.isPending}
      title="New machine"
      actions={
        <>
          <Button kind="primary" unavailable={missing} pending={make.isPending} onClick={submit}>
            Make the machine
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <TextField label="Name" value={name} onChange={setName} maxLength={80} error={fieldError(make.error, '/name')} />
      <TextField label="Key" mono value={key} onChange={setOwnKey} maxLength={40} spellCheck={false} error={fieldError(make.error, '/key')} help="stands in addresses and documents; lower-case letters, digits and hyphens; it stays" />
      <TextArea label="Description" value={description} onChange={setDescription} maxLength={400} rows={2} error={fieldError(make.error, '/description')} />
      <ProblemPanel problem={make.error} shown={['/name', '/key', '/description']} />
    </Dialog>
  )
}
