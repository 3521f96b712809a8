import type { ReactNode } from 'react'

export interface SectionHeadingProps {
  children: ReactNode
  level?: 2 | 3
  id?: string
  /** Quiet words at the far end of the line. */
  aux?: ReactNode
  /** Links or buttons after them. */
  actions?: ReactNode
  className?: string
}

/** A heading that runs out into a hairline. */
export function SectionHeading({ children, level = 2, id, aux, actions, className = '' }: SectionHeadingProps) {
  const Heading = level === 2 ? 'h2' : 'h3'
  return (
    <div className={`section-heading ${className}`}>
      <Heading id={id}>{children}</Heading>
      {aux !== undefined && aux !== null && <span className="aux">{aux}</span>}
      {actions !== undefined && actions !== null && <span className="acts">{actions}</span>}
    </div>
  )
}
