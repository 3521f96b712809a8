import { useEffect, useId, useRef } from 'react'
import type { ReactNode } from 'react'
import { Key } from './key.tsx'

export interface DialogProps {
  open: boolean
  /** Esc, or a press outside. Not called while `busy`. */
  onClose: () => void
  title: string
  children: ReactNode
  /** Buttons, first the act, then the way back. */
  actions?: ReactNode
  wide?: boolean
  /** An act is under way: the dialog stays. */
  busy?: boolean
}

/** A native modal dialog: the page under it is inert, Esc closes, focus returns to where it was. */
export function Dialog({ open, onClose, title, children, actions, wide = false, busy = false }: DialogProps) {
  const ref = useRef<HTMLDialogElement>(null)
  const titleId = useId()

  useEffect(() => {
    const dialog = ref.current
    if (!open || !dialog) return
    const before = document.activeElement
    dialog.showModal()
    const first = dialog.querySelector<HTMLElement>('[autofocus], input, textarea, select')
    first?.focus()
    return () => {
      dialog.close()
      if (before instanceof HTMLElement && before.isConnected) before.focus()
    }
  }, [open])

  if (!open) return null
  return (
    <dialog
      ref={ref}
      className={wide ? 'dialog dialog-wide' : 'dialog'}
      aria-labelledby={titleId}
      onCancel={(event) => {
        event.preventDefault()
        if (!busy) onClose()
      }}
      onMouseDown={(event) => {
        if (event.target === event.currentTarget && !busy) onClose()
      }}
    >
      <h2 id={titleId} className="border-b border-hairline px-[18px] py-3">
        {title}
      </h2>
      <div className="px-[18px] pt-[14px] pb-[18px]">
        <div className="grid gap-3">{children}</div>
        {actions && (
          <div className="mt-4 flex flex-wrap items-center gap-3">
            {actions}
            <span className="ml-auto hidden sm:inline">
              <Key>Esc</Key>
            </span>
          </div>
        )}
      </div>
    </dialog>
  )
}
