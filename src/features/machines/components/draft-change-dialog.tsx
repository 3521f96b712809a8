import { useState } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useDraftChange } from '../mutations.ts'

export interface DraftChangeDialogProps {
  machine: string
  machineName: string
  /** version it starts from; null before the first release */
  base: string | null
  onClose: () => void
  onDrafted: (change: string) => void
}

export function DraftChangeDialog({ machine, machineName, base, onClose, onDrafted }: DraftChangeDialogProps) {
  const draft = useDraftChange()
  const [title, setTitle] = useState('')
  const [reason, setReason] = useState('')
  return (
    <Dialog
      open
      onClose={onClose}
      busy={draft.isPending}
      title={`Draft a change of ${machineName}`}
      actions={
        <>
          <Button
            kind="primary"
            unavailable={title.trim() === '' ? 'Write a title first.' : null}
            pending={draft.isPending}
            onClick={() => draft.mutate({ machine, title: title.trim(), ...(reason.trim() === '' ? {} : { reason: reason.trim() }) }, { onSuccess: ({ key }) => onDrafted(key) })}
          >
            Draft it
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <p className="text-13 text-ink-2">{base ? <>It starts from release <span className="num">{base}</span>.</> : 'It starts from nothing: this machine has no release yet.'}</p>
      <TextField label="Title" help="what the change is for, in a few words" value={title} onChange={setTitle} maxLength={120} error={fieldError(draft.error, '/title')} />
      <TextArea label="Reason" help="can be written later; it is needed to submit" value={reason} onChange={setReason} maxLength={4000} error={fieldError(draft.error, '/reason')} />
      <ProblemPanel problem={draft.error} shown={['/title', '/reason']} />
    </Dialog>
  )
}
