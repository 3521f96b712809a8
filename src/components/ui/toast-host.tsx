import { useCallback, useEffect, useRef, useState } from 'react'
import type { ReactNode } from 'react'
import { Time } from './time.tsx'
import { ToastContext } from './toast-context.ts'
import type { ToastMessage } from './toast-context.ts'

interface Shown extends ToastMessage {
  id: number
  at: number
}

const MOST = 3
const SECONDS = 8

/** Holds the messages of the last acts; they leave after eight seconds, but not while pointed at or focused. */
export function ToastHost({ children }: { children: ReactNode }) {
  const [shown, setShown] = useState<Shown[]>([])
  const [held, setHeld] = useState(false)
  const next = useRef(1)

  const show = useCallback((message: ToastMessage) => {
    const id = next.current++
    setShown((list) => [...list, { ...message, id, at: Date.now() }].slice(-MOST))
  }, [])
  const drop = (id: number) => setShown((list) => list.filter((t) => t.id !== id))

  const oldest = shown[0]?.id
  useEffect(() => {
    if (oldest === undefined || held) return
    const timer = setTimeout(() => drop(oldest), SECONDS * 1000)
    return () => clearTimeout(timer)
  }, [oldest, held])

  return (
    <ToastContext value={show}>
      {children}
      <div className="toasts" role="status" aria-live="polite" onMouseEnter={() => setHeld(true)} onMouseLeave={() => setHeld(false)} onFocus={() => setHeld(true)} onBlur={() => setHeld(false)}>
        {shown.map((t) => (
          <div key={t.id} className="toast">
            <span className="text-13"><Time at={t.at} style="clock" /></span>
            <span>{t.text}</span>
            {t.action && (
              <button type="button" onClick={() => { drop(t.id); t.action?.onSelect() }}>
                {t.action.label}
              </button>
            )}
            <button type="button" aria-label="put away" onClick={() => drop(t.id)} className="leading-none">
              ×
            </button>
          </div>
        ))}
      </div>
    </ToastContext>
  )
}
