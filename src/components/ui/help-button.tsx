import { lazy, Suspense, useId, useRef, useState } from 'react'

// The texts come when they are first asked for; the desk needs none.
const HelpPopover = lazy(() => import('./help-popover.tsx'))

export interface HelpButtonProps {
  /** "role:velocity.kp", "finding:phase margin", "figure:bandwidth" (shared/help) */
  topic: string
  /** what it explains, said to a screen reader: "velocity gain" */
  about: string
  /** F1 comes here from a grid whose chosen value this stands beside */
  ofChosen?: true
}

/** A small question mark beside a label; it, or F1 on the field beside it, opens a short explanation. */
export function HelpButton({ topic, about, ofChosen }: HelpButtonProps) {
  const [open, setOpen] = useState(false)
  const button = useRef<HTMLButtonElement>(null)
  const id = useId()
  return (
    <>
      <button
        ref={button}
        type="button"
        className="help-button"
        data-help={ofChosen ? 'chosen' : 'here'}
        aria-label={`what is ${about}?`}
        aria-haspopup="dialog"
        aria-expanded={open}
        aria-controls={open ? id : undefined}
        onClick={() => setOpen(!open)}
      >
        ?
      </button>
      {open && (
        <Suspense fallback={null}>
          <HelpPopover id={id} topic={topic} at={button} onClose={() => setOpen(false)} />
        </Suspense>
      )}
    </>
  )
}
