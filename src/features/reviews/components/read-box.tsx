import type { Marked } from '../../../../shared/contract/reviews.ts'
import type { Reading } from '../use-reading.ts'

/** The mark of one row: read by the reader, as it stands now. Nothing for who does not read to sign. */
export function ReadBox({ row, title, reading }: { row: Marked; title: string; reading: Reading | null }) {
  if (!reading?.mark) return null
  return <input type="checkbox" className="tick align-middle" aria-label={`${title} is read`} data-read={reading.read.has(row.key)} checked={reading.read.has(row.key)} onChange={(e) => reading.mark?.([row], e.target.checked)} />
}

/** Marks all rows of a part at once, when they are read. */
export function ReadAll({ rows, what, reading }: { rows: readonly Marked[]; what: string; reading: Reading | null }) {
  const open = rows.filter((r) => !reading?.read.has(r.key))
  if (!reading?.mark || open.length === 0) return null
  return (
    <button type="button" className="link" onClick={() => reading.mark?.(open, true)}>
      mark {open.length === rows.length ? 'all' : open.length} as read<span className="sr-only">, {what}</span>
    </button>
  )
}
