export type RailState = 'draft' | 'submitted' | 'approved' | 'released' | 'returned' | 'signature void' | 'cancelled'

const PLACES = ['draft', 'submitted', 'approved', 'released'] as const

export interface SmallRailProps {
  state: RailState
  /** For a cancelled change: how far it had come. */
  reached?: (typeof PLACES)[number]
  /** Other words than the state's own. */
  children?: React.ReactNode
}

/** A change's life as a mark in tables: the ball in the notch reached, a struck notch for a signature lost, a broken line for the end. */
export function SmallRail({ state, reached = 'submitted', children = state }: SmallRailProps) {
  const place = state === 'returned' ? 'draft' : state === 'signature void' ? 'submitted' : state === 'cancelled' ? reached : state
  const at = PLACES.indexOf(place)
  const struck = state === 'returned' ? 1 : state === 'signature void' ? 2 : -1
  const x = 9 + 18 * at
  return (
    <span className="mark whitespace-nowrap">
      <svg width="72" height="13" viewBox="0 0 72 13" aria-hidden="true">
        <path d={`${line(3)}L72 4`} fill="none" stroke="var(--rule)" strokeWidth="1.1" />
        {at > 0 && <path d={line(at)} fill="none" stroke="var(--ink)" strokeWidth="1.5" />}
        {state === 'cancelled' ? (
          <>
            <path d={`M${x + 7} -1l3 4-3 3 3 4`} fill="none" stroke="var(--ink)" strokeWidth="1.2" />
            <circle cx={x} cy="4" r="3.4" fill="var(--sheet)" stroke="var(--ink)" strokeWidth="1.2" />
          </>
        ) : (
          <circle cx={x} cy="3.9" r="3.9" fill="var(--brass)" />
        )}
        {struck >= 0 && <path d={`M${4 + 18 * struck} 12l10-13`} stroke="var(--oxide)" strokeWidth="1.7" />}
      </svg>
      <span>{children}</span>
    </span>
  )
}

/** The line with its notches up to and with place `n`. */
function line(n: number): string {
  let d = 'M0 4'
  for (let i = 0; i <= n; i++) d += `L${4 + 18 * i} 4L${9 + 18 * i} 10L${14 + 18 * i} 4`
  return d
}
