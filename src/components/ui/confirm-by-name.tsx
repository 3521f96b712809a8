import { useState } from 'react'
import type { ReactNode } from 'react'
import { Button } from './button.tsx'
import { Dialog } from './dialog.tsx'
import { TextField } from './text-field.tsx'

export interface ConfirmByNameProps {
  open: boolean
  onClose: () => void
  title: string
  /** What must be typed: "Dunlin 1.6.2". */
  name: string
  /** What it is the name of: "release", "machine". */
  noun: string
  /** The act on the button: "Withdraw". */
  act: string
  /** The way back: "Keep it". */
  keep?: string
  onConfirm: () => void
  pending?: boolean
  error?: string | null
  /** The consequences, and other fields such as a reason. */
  children: ReactNode
  /** Why the act is not possible yet for another cause than the name, as a missing reason. */
  unavailable?: string | null
}

/** A destructive act asks for the name of what it destroys, not "are you sure". */
export function ConfirmByName({ open, ...rest }: ConfirmByNameProps) {
  return open ? <OpenConfirm {...rest} /> : null
}

/** Mounted per opening, so that a name typed once is not still there the next time. */
function OpenConfirm({ onClose, title, name, noun, act, keep = 'Keep it', onConfirm, pending = false, error, children, unavailable }: Omit<ConfirmByNameProps, 'open'>) {
  const [typed, setTyped] = useState('')
  const named = typed.trim() === name
  const missing = named ? (unavailable ?? null) : `Write "${name}" first.`
  const confirm = () => {
    if (missing === null && !pending) onConfirm()
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title={title}
      busy={pending}
      actions={
        <>
          <Button kind="danger" unavailable={missing} pending={pending} onClick={confirm}>
            {act}
          </Button>
          <Button onClick={onClose} unavailable={pending ? 'The act is under way.' : null}>
            {keep}
          </Button>
        </>
      }
    >
      {children}
      <TextField
        label={`Write the name of the ${noun}`}
        help={<span className="num">{name}</span>}
        mono
        autoComplete="off"
        spellCheck={false}
        value={typed}
        onChange={setTyped}
        error={error}
        onKeyDown={(event) => {
          if (event.key === 'Enter') {
            event.preventDefault()
            confirm()
          }
        }}
      />
    </Dialog>
  )
}
