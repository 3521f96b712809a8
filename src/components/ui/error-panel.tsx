import type { ReactNode } from 'react'
import { Link } from 'react-router'
import { Button } from './button.tsx'

export interface ErrorPointer {
  /** JSON pointer, line or field the message is about. */
  pointer: string
  message: string
  to?: string
}

export interface ErrorPanelProps {
  title: string
  happened?: ReactNode
  kept?: ReactNode
  whatToDo?: ReactNode
  pointers?: readonly ErrorPointer[]
  onRetry?: () => void
  className?: string
}

/** An error in full: what happened, what was kept, what to do, and where. Announced when it appears. */
export function ErrorPanel({ title, happened, kept, whatToDo, pointers = [], onRetry, className = '' }: ErrorPanelProps) {
  return (
    <div role="alert" className={`error-panel ${className}`}>
      <p className="font-medium text-oxide">{title}</p>
      {happened && <p>{happened}</p>}
      {kept && <p>{kept}</p>}
      {whatToDo && <p>{whatToDo}</p>}
      {pointers.length > 0 && (
        <ul className="mt-1 grid gap-1">
          {pointers.map((p, i) => (
            <li key={`${p.pointer} ${i}`} className="grid gap-x-3 sm:grid-cols-[minmax(120px,auto)_1fr] sm:justify-start">
              {p.to ? (
                <Link to={p.to} className="num link justify-self-start">
                  {p.pointer}
                </Link>
              ) : (
                <span className="num text-ink-2">{p.pointer}</span>
              )}
              <span>{p.message}</span>
            </li>
          ))}
        </ul>
      )}
      {onRetry && (
        <Button small className="mt-2" onClick={onRetry}>
          Try again
        </Button>
      )}
    </div>
  )
}
