import { useState } from 'react'
import type { KeyboardEvent, ReactNode } from 'react'
import type { Column, Sort } from './table-column.ts'
import { TableHead } from './table-head.tsx'
import { TableRow } from './table-row.tsx'

export type { Column, Sort } from './table-column.ts'

export interface TableProps<Row> {
  /** Named for a screen reader; not shown. */
  label: string
  rows: readonly Row[]
  columns: readonly Column<Row>[]
  rowKey: (row: Row) => string
  /** Where the row leads: its first cell becomes a link and Enter opens it. */
  rowTo?: (row: Row) => string
  /** Or what it does. */
  onOpen?: (row: Row) => void
  /** Rows marked as chosen. */
  chosen?: (row: Row) => boolean
  /** Sort from outside, as from the URL; otherwise the table keeps its own. */
  sort?: Sort | null
  onSort?: (sort: Sort | null) => void
  /** Instead of rows when there are none. */
  empty?: ReactNode
  dense?: boolean
  className?: string
}

/**
 * Rows of 32 px under a head that stays. One row at a time is in the tab order; ↑ ↓ Home End move between rows, Enter opens.
 */
export function Table<Row>({ label, rows, columns, rowKey, rowTo, onOpen, chosen, sort: given, onSort, empty, dense = false, className = '' }: TableProps<Row>) {
  const [own, setOwn] = useState<Sort | null>(null)
  const [at, setAt] = useState<string | null>(null)
  const sort = given === undefined ? own : given
  const setSort = onSort ?? setOwn
  const sorted = sortRows(rows, columns, sort)
  const places = new Map(columns.filter((c) => c.decimal).map((c) => [c.key, decimalPlaces(rows, c)]))
  const tabKey = sorted.some((r) => rowKey(r) === at) ? at : sorted.length > 0 ? rowKey(sorted[0]) : null

  return (
    <div className={`table-frame ${className}`}>
      <table className={dense ? 'table table-dense' : 'table'} aria-label={label}>
        <TableHead columns={columns} sort={sort} onSort={setSort} />
        <tbody onKeyDown={moveByRow}>
          {sorted.map((row) => {
            const key = rowKey(row)
            return (
              <TableRow
                key={key}
                row={row}
                columns={columns}
                places={places}
                to={rowTo?.(row)}
                onOpen={onOpen && (() => onOpen(row))}
                chosen={chosen?.(row) ?? false}
                inTabOrder={key === tabKey}
                onFocus={() => setAt(key)}
              />
            )
          })}
          {sorted.length === 0 && (
            <tr>
              <td colSpan={columns.length} className="py-4 text-center text-ink-2">
                {empty ?? 'Nothing here.'}
              </td>
            </tr>
          )}
        </tbody>
      </table>
    </div>
  )
}

/** ↑ ↓ Home End between the rows' handles: the link of the first cell, or the row itself. Not while a field in the row is edited. */
function moveByRow(event: KeyboardEvent<HTMLTableSectionElement>) {
  const target = event.target as HTMLElement
  if (target.closest('input, textarea, select, [role="slider"], [role="menu"]')) return
  const handles = [...event.currentTarget.querySelectorAll<HTMLElement>('[data-row-handle]')]
  const here = handles.findIndex((h) => h === target || h.closest('tr') === target.closest('tr'))
  const next =
    event.key === 'ArrowDown' ? Math.min(here + 1, handles.length - 1)
    : event.key === 'ArrowUp' ? Math.max(here - 1, 0)
    : event.key === 'Home' ? 0
    : event.key === 'End' ? handles.length - 1
    : null
  if (next === null || here < 0) return
  event.preventDefault()
  handles[next].focus()
}

function sortRows<Row>(rows: readonly Row[], columns: readonly Column<Row>[], sort: Sort | null): readonly Row[] {
  const by = sort && columns.find((c) => c.key === sort.key)?.sortBy
  if (!by) return rows
  return rows.toSorted((a, b) => {
    const [x, y] = [by(a), by(b)]
    if (x === null || y === null) return x === y ? 0 : x === null ? 1 : -1
    const order = typeof x === 'number' && typeof y === 'number' ? x - y : String(x).localeCompare(String(y), 'en-GB', { numeric: true })
    return sort.descending ? -order : order
  })
}

/** Most characters from the decimal point on, in any row. */
function decimalPlaces<Row>(rows: readonly Row[], column: Column<Row>): number {
  let most = 0
  for (const row of rows) {
    const text = column.decimal?.(row)
    const point = text?.indexOf('.') ?? -1
    if (text && point >= 0) most = Math.max(most, text.length - point)
  }
  return most
}
