import type { ReactNode } from 'react'
import { Button } from './button.tsx'
import { Dialog } from './dialog.tsx'

export interface FormDialogProps {
  title: string
  act: string
  danger?: boolean
  /** what is to be filled in first; null when nothing is */
  missing: string | null
  pending: boolean
  onSend: () => void
  onClose: () => void
  /** words of leaving without the act */
  leave?: string
  children: ReactNode
}

/** A dialog whose fields are sent by its button, or by Enter in one of them. */
export function FormDialog({ title, act, danger = false, missing, pending, onSend, onClose, leave = 'Cancel', children }: FormDialogProps) {
  return (
    <Dialog
      open
      onClose={onClose}
      busy={pending}
      title={title}
      actions={
        <>
          <Button kind={danger ? 'danger' : 'primary'} unavailable={missing} pending={pending} onClick={onSend}>
            {act}
          </Button>
          <Button onClick={onClose}>{leave}</Button>
        </>
      }
    >
      <form
        noValidate
        className="grid gap-3"
        onSubmit={(event) => {
          event.preventDefault()
          if (missing === null && !pending) onSend()
        }}
      >
        {children}
        {/* Enter in a field sends the form; the buttons stand below it. */}
        <button type="submit" hidden />
      </form>
    </Dialog>
  )
}
