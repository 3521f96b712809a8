import { formatTime, formatUtc } from '../../lib/format.ts'
import type { TimeStyle } from '../../lib/format.ts'

/** A time in the reader's zone, with UTC on hover. */
export function Time({ at, style = 'short' }: { at: string | number | Date; style?: TimeStyle }) {
  const date = new Date(at)
  if (Number.isNaN(date.getTime())) return <span>time unknown</span>
  return (
    <time dateTime={date.toISOString()} title={formatUtc(date)} className="num whitespace-nowrap">
      {formatTime(date, style)}
    </time>
  )
}
