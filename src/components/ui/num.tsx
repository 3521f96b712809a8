import { formatExact, formatQuantity } from '../../lib/format.ts'

export interface NumProps {
  /** A number, shown to `digits`, or a decimal text, shown as it is. */
  value: number | string | null | undefined
  unit?: string
  digits?: number
  plus?: boolean
  className?: string
}

/** A number in engineering notation, tabular, its unit quiet after a thin space. A missing one is a dash, read out as "none". */
export function Num({ value, unit = '', digits, plus, className = '' }: NumProps) {
  if (value === null || value === undefined || value === '') {
    return (
      <span className={`num text-ink-2 ${className}`}>
        <span aria-hidden="true">–</span>
        <span className="sr-only">none</span>
      </span>
    )
  }
  const q = typeof value === 'string' ? { number: formatExact(value), unit, power: 0 } : formatQuantity(value, unit, { digits, plus })
  return (
    <span className={`whitespace-nowrap ${className}`}>
      <span className="num grouped">
        {q.number}
        {q.power !== 0 && (
          <>
            ·10<sup className="text-[0.75em] leading-none">{String(q.power).replace('-', '\u2212')}</sup>
          </>
        )}
      </span>
      {q.unit && <span className="unit ml-[.22em]">{q.unit}</span>}
    </span>
  )
}
