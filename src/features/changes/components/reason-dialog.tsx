import { useState } from 'react'
import type { ReactNode } from 'react'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'

export interface ReasonDialogProps {
  title: string
  act: string
  keep: string
  children: ReactNode
  onConfirm: (reason: string) => void
  onClose: () => void
  pending: boolean
  problem: unknown
}

/** An act that needs a reason in words, such as cancelling. */
export function ReasonDialog({ title, act, keep, children, onConfirm, onClose, pending, problem }: ReasonDialogProps) {
  const [reason, setReason] = useState('')
  const [pressed, setPressed] = useState(false)
  return (
    <Dialog
      open
      onClose={onClose}
      title={title}
      busy={pending}
      actions={
        <>
          <Button
            kind="danger"
            pending={pending}
            onClick={() => {
              setPressed(true)
              if (reason.trim() !== '') onConfirm(reason.trim())
            }}
          >
            {act}
          </Button>
          <Button onClick={onClose}>{keep}</Button>
        </>
      }
    >
      {children}
      <TextArea label="Reason" value={reason} onChange={setReason} maxLength={2000} error={pressed && reason.trim() === '' ? 'A reason is needed.' : null} />
      <ProblemPanel problem={problem} />
    </Dialog>
  )
}
