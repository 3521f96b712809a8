import { useState } from 'react'
import { fieldError } from '../../../lib/api-client.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'

/** Returns a change to draft, with the reason its writers will read. */
export function ReturnDialog({ title, onReturn, onClose, pending, problem }: { title: string; onReturn: (reason: string) => void; onClose: () => void; pending: boolean; problem: unknown }) {
  const [reason, setReason] = useState('')
  const [pressed, setPressed] = useState(false)
  return (
    <Dialog
      open
      busy={pending}
      onClose={onClose}
      title={`Return “${title}”`}
      actions={
        <>
          <Button
            kind="danger"
            pending={pending}
            onClick={() => {
              setPressed(true)
              if (reason.trim() !== '') onReturn(reason.trim())
            }}
          >
            Return it
          </Button>
          <Button onClick={onClose}>Leave it as it is</Button>
        </>
      }
    >
      <p className="text-13 text-ink-2">It becomes a draft again, what was signed is void, and its writers are mailed the reason.</p>
      <TextArea label="Reason" value={reason} onChange={setReason} maxLength={2000} error={pressed && reason.trim() === '' ? 'Say what is to be altered.' : fieldError(problem, '/reason')} />
      <ProblemPanel problem={problem} shown={['/reason']} />
    </Dialog>
  )
}
