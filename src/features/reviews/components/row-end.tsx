import type { NamedRow, RowTools } from '../row-tools.ts'
import { ReadMark } from './read-mark.tsx'

/** The end of a row: its comments, and whether it is read. */
export function RowEnd({ row, tools }: { row: NamedRow; tools: RowTools }) {
  return (
    <span className="no-print flex items-center justify-end gap-1">
      {tools.aside(row)}
      {tools.read && <ReadMark title={row.title} read={tools.read.has(row.key)} onChange={(read) => tools.onRead(row, read)} />}
    </span>
  )
}
