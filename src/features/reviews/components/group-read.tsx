import type { Marked } from '../../../../shared/contract/reviews.ts'
import { count } from '../../../lib/format.ts'
import type { RowTools } from '../row-tools.ts'

/** Marks what is unread of a group as read; says so when all of it is. */
export function GroupRead({ rows, tools, onReadAll, what }: { rows: readonly Marked[]; tools: RowTools; onReadAll: (rows: readonly Marked[]) => void; what: string }) {
  if (!tools.read) return null
  const unread = rows.filter((r) => !tools.read!.has(r.key))
  if (unread.length === 0) return <span className="no-print text-12 text-ink-2">all read</span>
  return (
    <button type="button" className="link no-print text-13" onClick={() => onReadAll(unread)}>
      mark {unread.length === 1 ? 'one row' : count(unread.length, 'row')} as read<span className="sr-only">: {what}</span>
    </button>
  )
}
