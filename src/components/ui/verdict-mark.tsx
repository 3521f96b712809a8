export type Verdict = 'stable' | 'on the boundary' | 'unstable'

const COLOUR: Record<Verdict, string> = { stable: 'text-verdigris', 'on the boundary': 'text-plum', unstable: 'text-oxide' }

export interface VerdictMarkProps {
  verdict: Verdict
  size?: number
  /** Other words than the verdict's own. Never none: a mark is a shape and a word. */
  children?: React.ReactNode
  className?: string
}

/** Ball in the valley, on the flat, on the hill. */
export function VerdictMark({ verdict, size = 22, children = verdict, className = '' }: VerdictMarkProps) {
  return (
    <span className={`mark ${COLOUR[verdict]} ${className}`}>
      <svg width={size} height={size} viewBox="0 0 18 18" aria-hidden="true">
        {verdict === 'stable' && <><path d="M1 5l8 9.5L17 5" fill="none" stroke="currentColor" strokeWidth="1.6" /><circle cx="9" cy="6.9" r="4.2" fill="currentColor" /></>}
        {verdict === 'on the boundary' && <><path d="M1 13.5h16" stroke="currentColor" strokeWidth="1.6" /><circle cx="9" cy="8.4" r="4.2" fill="currentColor" /></>}
        {verdict === 'unstable' && <><path d="M1 16l8-8.5L17 16" fill="none" stroke="currentColor" strokeWidth="1.6" /><circle cx="13.6" cy="5.6" r="4.2" fill="currentColor" /></>}
      </svg>
      <span>{children}</span>
    </span>
  )
}
