import type { ReactNode } from 'react'

export interface StepProps {
  title: ReactNode
  /** done: the ball in its notch; now: in brass; later: the notch empty */
  at: 'done' | 'now' | 'later'
  last?: boolean
  children?: ReactNode
}

/** One step at the bench, on a line of notches. */
export function Step({ title, at, last = false, children }: StepProps) {
  return (
    <li className="relative grid grid-cols-[26px_minmax(0,1fr)] gap-x-3 pb-3" aria-current={at === 'now' ? 'step' : undefined}>
      {!last && <span aria-hidden="true" className="absolute top-[26px] bottom-[-2px] left-[12.5px] w-px bg-hairline" />}
      <svg width="26" height="24" viewBox="0 0 26 24" aria-hidden="true">
        <path d="M0 9H5L13 19L21 9H26" fill="none" stroke={at === 'later' ? 'var(--rule)' : 'var(--ink)'} strokeWidth="1.5" />
        {at !== 'later' && <circle cx="13" cy="9.4" r="6" fill={at === 'now' ? 'var(--brass)' : 'var(--ink)'} />}
      </svg>
      <div className="min-w-0">
        <h2 className="text-16 font-medium">
          {title}
          <span className="sr-only">{at === 'done' ? ', done' : at === 'now' ? ', now' : ''}</span>
        </h2>
        {children}
      </div>
    </li>
  )
}
