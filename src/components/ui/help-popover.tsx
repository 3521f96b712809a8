import { useEffect, useRef } from 'react'
import type { RefObject } from 'react'
import { findHelp } from '../../../shared/help/find-help.ts'
import { HelpText } from './help-text.tsx'

const gap = 6

/** Under the button where there is room, above it otherwise, and never past the edge. */
function place(popover: HTMLElement, button: HTMLElement) {
  const [at, own] = [button.getBoundingClientRect(), popover.getBoundingClientRect()]
  const left = Math.max(gap, Math.min(at.left, window.innerWidth - own.width - gap))
  const below = at.bottom + gap
  const top = below + own.height > window.innerHeight - gap ? Math.max(gap, at.top - own.height - gap) : below
  Object.assign(popover.style, { left: `${left}px`, top: `${top}px` })
}

export interface HelpPopoverProps {
  id: string
  topic: string
  at: RefObject<HTMLButtonElement | null>
  onClose: () => void
}

/** A native popover: above everything, closed by Esc or a press elsewhere; the focus goes in and comes back. */
export default function HelpPopover({ id, topic, at, onClose }: HelpPopoverProps) {
  const popover = useRef<HTMLDivElement>(null)
  const help = findHelp(topic)
  useEffect(() => {
    const element = popover.current
    const button = at.current
    if (!element || !button) return
    element.showPopover()
    place(element, button)
    element.focus()
    const away = () => element.hidePopover()
    window.addEventListener('scroll', away, { passive: true })
    return () => {
      window.removeEventListener('scroll', away)
      button.focus({ preventScroll: true })
    }
  }, [at])
  return (
    <div
      ref={popover}
      id={id}
      popover="auto"
      role="dialog"
      aria-label={help?.title ?? 'help'}
      tabIndex={-1}
      className="help-popover"
      onToggle={(event) => {
        if ((event.nativeEvent as ToggleEvent).newState === 'closed') onClose()
      }}
      onKeyDown={(event) => {
        event.stopPropagation()
        if (event.key === 'Escape') popover.current?.hidePopover()
      }}
    >
      {help ? <HelpText help={help} /> : 'Nothing is written about this yet.'}
    </div>
  )
}
