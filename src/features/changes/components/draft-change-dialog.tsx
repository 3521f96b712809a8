import { useState } from 'react'
import { fieldError } from '../../../lib/api-client.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { useDraftChange } from '../mutations.ts'

export interface DraftChangeDialogProps {
  machines: readonly { key: string; name: string; currentVersion: string | null }[]
  machine: string | null
  onDrafted: (change: string) => void
  onClose: () => void
}

/** Begins a change: machine, title, and, if known already, the reason. */
export function DraftChangeDialog({ machines, machine, onDrafted, onClose }: DraftChangeDialogProps) {
  const draft = useDraftChange()
  const [key, setKey] = useState(machine ?? (machines.length === 1 ? machines[0].key : ''))
  const [title, setTitle] = useState('')
  const [reason, setReason] = useState('')
  const [pressed, setPressed] = useState(false)
  const chosen = machines.find((m) => m.key === key)
  const titleError = title.trim() === '' ? 'A change needs a title.' : null
  const begin = () => {
    setPressed(true)
    if (!chosen || titleError) return
    draft.mutate({ machine: key, title: title.trim(), reason: reason.trim() }, { onSuccess: (made) => onDrafted(made.key) })
  }
  return (
    <Dialog
      open
      busy={draft.isPending}
      onClose={onClose}
      title="Draft a change"
      actions={
        <>
          <Button kind="primary" pending={draft.isPending} onClick={begin}>
            Draft it
          </Button>
          <Button onClick={onClose}>Leave it</Button>
        </>
      }
    >
      <Select
        label="Machine"
        placeholder="choose"
        value={key}
        onChange={setKey}
        options={machines.map((m) => ({ value: m.key, label: m.name }))}
        help={chosen ? (chosen.currentVersion ? <>from release <span className="num">{chosen.currentVersion}</span></> : 'from its newest release, or from nothing') : undefined}
        error={pressed && !chosen ? 'Choose the machine.' : fieldError(draft.error, '/machine')}
      />
      <TextField label="Title" value={title} onChange={setTitle} maxLength={120} placeholder="Stiffer knee for soft mud" error={pressed ? (titleError ?? fieldError(draft.error, '/title')) : null} />
      <TextArea label="Reason" value={reason} onChange={setReason} maxLength={4000} help="It can be written later; submitting needs it." error={fieldError(draft.error, '/reason')} />
      <ProblemPanel problem={draft.error} shown={['/machine', '/title', '/reason']} />
    </Dialog>
  )
}
