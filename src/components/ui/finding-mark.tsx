export type FindingLevel = 'pass' | 'advise' | 'concession needed' | 'block'

const COLOUR: Record<FindingLevel, string> = { pass: 'text-verdigris', advise: 'text-slate', 'concession needed': 'text-plum', block: 'text-oxide' }

export interface FindingMarkProps {
  level: FindingLevel
  size?: number
  /** Other words than the level's own. */
  children?: React.ReactNode
  className?: string
}

/** Seated ball; a leader as on a drawing; half-filled diamond; solid, barred square. */
export function FindingMark({ level, size = 18, children = level, className = '' }: FindingMarkProps) {
  return (
    <span className={`mark ${COLOUR[level]} ${className}`}>
      <svg width={size} height={size} viewBox="0 0 18 18" aria-hidden="true">
        {level === 'pass' && <><path d="M2 6l7 8.5L16 6" fill="none" stroke="currentColor" strokeWidth="1.6" /><circle cx="9" cy="7.3" r="3.7" fill="currentColor" /></>}
        {level === 'advise' && <><path d="M16.5 3.5H10L3.6 13.8" fill="none" stroke="currentColor" strokeWidth="1.6" /><path d="M2.2 16.2l.6-5.6 4.3 2.7z" fill="currentColor" /><circle cx="14.5" cy="8.5" r="1.5" fill="currentColor" /></>}
        {level === 'concession needed' && <><path d="M9 1.5L16.5 9 9 16.5 1.5 9z" fill="none" stroke="currentColor" strokeWidth="1.6" /><path d="M9 1.5V16.5L1.5 9z" fill="currentColor" /></>}
        {level === 'block' && <><rect x="2" y="2" width="14" height="14" fill="currentColor" /><path d="M5 5l8 8" stroke="var(--sheet)" strokeWidth="2" /></>}
      </svg>
      <span>{children}</span>
    </span>
  )
}
