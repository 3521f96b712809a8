import { useState } from 'react'
import type { MachineView } from '../../../../shared/contract/machines.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useDescribeMachine } from '../mutations.ts'

export function DescribeMachineDialog({ machine, onClose }: { machine: Pick<MachineView, 'key' | 'name' | 'description'>; onClose: () => void }) {
  const describe = useDescribeMachine(machine.key)
  const [name, setName] = useState(machine.name)
  const [description, setDescription] = useState(machine.description)
  const same = name.trim() === machine.name && description.trim() === machine.description
  const missing = name.trim() === '' ? 'A machine has a name.' : same ? 'Nothing is altered yet.' : null
  return (
    <Dialog
      open
      onClose={onClose}
      busy={describe.isPending}
      title={`Describe ${machine.name}`}
      actions={
        <>
          <Button kind="primary" unavailable={missing} pending={describe.isPending} onClick={() => describe.mutate({ name: name.trim(), description: description.trim() }, { onSuccess: onClose })}>
            Save
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <TextField label="Name" value={name} onChange={setName} maxLength={80} error={fieldError(describe.error, '/name')} />
      <TextArea label="Description" value={description} onChange={setDescription} maxLength={400} rows={2} error={fieldError(describe.error, '/description')} />
      <ProblemPanel problem={describe.error} shown={['/name', '/description']} />
    </Dialog>
  )
}
