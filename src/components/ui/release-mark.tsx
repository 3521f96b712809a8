export type ReleaseState = 'current' | 'superseded' | 'withdrawn'

const COLOUR: Record<ReleaseState, string> = { current: 'text-verdigris', superseded: 'text-ink-2', withdrawn: 'text-oxide' }

/** Ball in its notch; the notch left empty; the notch struck. */
export function ReleaseMark({ state, size = 18, children = state, className = '' }: { state: ReleaseState; size?: number; children?: React.ReactNode; className?: string }) {
  return (
    <span className={`mark ${COLOUR[state]} ${className}`}>
      <svg width={size} height={size} viewBox="0 0 18 18" aria-hidden="true">
        <path d="M0 7H4l5 6 5-6h4" fill="none" stroke="currentColor" strokeWidth="1.6" />
        {state === 'current' && <circle cx="9" cy="6.4" r="3.9" fill="currentColor" />}
        {state === 'withdrawn' && <path d="M3.5 15.5L14.5 2.5" stroke="currentColor" strokeWidth="2" />}
      </svg>
      <span>{children}</span>
    </span>
  )
}
