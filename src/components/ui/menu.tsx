import { useEffect, useId, useRef, useState } from 'react'
import type { KeyboardEvent, ReactNode } from 'react'
import { Link } from 'react-router'

export interface MenuItem {
  label: ReactNode
  /** A place to go to, or an act. */
  to?: string
  onSelect?: () => void
  current?: boolean
  /** Quiet words at the far end. */
  note?: ReactNode
  danger?: boolean
}

export interface MenuProps {
  /** Said to a screen reader before the button's words. */
  label: string
  /** Inside the button. */
  children: ReactNode
  items: readonly MenuItem[]
  align?: 'start' | 'end'
  buttonClass?: string
}

/** A button with a menu below (WAI-ARIA APG, menu button): arrows, Home, End and first letters move, Esc closes and returns. */
export function Menu({ label, children, items, align = 'start', buttonClass = 'switch' }: MenuProps) {
  const [open, setOpen] = useState<'closed' | 'first' | 'last'>('closed')
  const root = useRef<HTMLDivElement>(null)
  const button = useRef<HTMLButtonElement>(null)
  const id = useId()

  useEffect(() => {
    if (open === 'closed') return
    const entries = menuItems(root.current)
    const current = entries.findIndex((e) => e.hasAttribute('aria-current'))
    entries[open === 'last' ? entries.length - 1 : Math.max(current, 0)]?.focus()
    const outside = (event: PointerEvent) => {
      if (event.target instanceof Node && !root.current?.contains(event.target)) setOpen('closed')
    }
    document.addEventListener('pointerdown', outside)
    return () => document.removeEventListener('pointerdown', outside)
  }, [open])

  const close = () => {
    setOpen('closed')
    button.current?.focus()
  }

  const onMenuKey = (event: KeyboardEvent) => {
    if (event.key === 'Escape' || event.key === 'Tab') {
      if (event.key === 'Escape') event.preventDefault()
      event.stopPropagation()
      close()
      return
    }
    const entries = menuItems(root.current)
    const here = entries.findIndex((e) => e === document.activeElement)
    const next = nextEntry(event.key, here, entries)
    if (next === null) return
    event.preventDefault()
    entries[next]?.focus()
  }

  return (
    <div className="relative" ref={root}>
      <button
        ref={button}
        type="button"
        className={buttonClass}
        aria-haspopup="menu"
        aria-expanded={open !== 'closed'}
        aria-controls={open === 'closed' ? undefined : id}
        onClick={() => setOpen(open === 'closed' ? 'first' : 'closed')}
        onKeyDown={(event) => {
          if (event.key !== 'ArrowDown' && event.key !== 'ArrowUp') return
          event.preventDefault()
          setOpen(event.key === 'ArrowDown' ? 'first' : 'last')
        }}
      >
        <span className="sr-only">{label}: </span>
        {children}
      </button>
      {open !== 'closed' && (
        <div id={id} role="menu" aria-label={label} className={`menu ${align === 'end' ? 'right-0' : 'left-0'}`} onKeyDown={onMenuKey}>
          {items.map((item, i) => {
            const inside = (
              <>
                <span className={item.danger ? 'text-oxide' : item.current ? 'font-medium' : ''}>{item.label}</span>
                {item.note && <span className="ml-auto text-12 text-ink-2">{item.note}</span>}
              </>
            )
            const shared = { role: 'menuitem', tabIndex: -1, className: 'menu-item', 'aria-current': item.current ? ('true' as const) : undefined }
            return item.to !== undefined ? (
              <Link key={i} {...shared} to={item.to} onClick={() => { close(); item.onSelect?.() }}>
                {inside}
              </Link>
            ) : (
              <button key={i} {...shared} type="button" onClick={() => { close(); item.onSelect?.() }}>
                {inside}
              </button>
            )
          })}
        </div>
      )}
    </div>
  )
}

function menuItems(root: HTMLElement | null): HTMLElement[] {
  return root ? [...root.querySelectorAll<HTMLElement>('[role="menuitem"]')] : []
}

function nextEntry(key: string, here: number, entries: HTMLElement[]): number | null {
  const n = entries.length
  if (key === 'ArrowDown') return (here + 1) % n
  if (key === 'ArrowUp') return (here - 1 + n) % n
  if (key === 'Home') return 0
  if (key === 'End') return n - 1
  if (key.length !== 1 || key === ' ') return null
  const letter = key.toLowerCase()
  for (let i = 1; i <= n; i++) {
    const at = (here + i) % n
    if (entries[at].textContent?.trim().toLowerCase().startsWith(letter)) return at
  }
  return null
}
