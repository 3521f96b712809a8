import type { ReactNode } from 'react'

/** The first power-on, in the words every download, bench card and flash record bears. */
const FIRST_POWER_ON = 'First power-on: joint free or unloaded, current limited, people clear, emergency stop in reach.'

/** A caution: the ink hazard hatch, no colour. Without children, the first power-on. */
export function Caution({ children = FIRST_POWER_ON, className = '' }: { children?: ReactNode; className?: string }) {
  return (
    <div className={`caution ${className}`} role="note" aria-label="caution">
      {children}
    </div>
  )
}
