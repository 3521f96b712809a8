import { lazy, Suspense, useState } from 'react'
import type { KeyboardEvent, ReactNode, Ref } from 'react'
import type { Column, Sort } from './table-column.ts'
import { TableHead } from './table-head.tsx'
import type { RowWindow } from './row-window.ts'
import { TableRow } from './table-row.tsx'
import { usePrinting } from './use-printing.ts'

export type { Column, Sort } from './table-column.ts'

/** A table with more rows than this keeps only those near the window in the page. */
const mostRowsInPage = 120
const LongTable = lazy(() => import('./long-table.tsx'))

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
 * Rows of 32 px under a head that stays. One row at a time is in the tab order; ↑ ↓ Home End move between rows, Enter opens. Of a long
 * table only the rows near the window are in the page; a screen reader is told of all.
 */
export function Table<Row>({ label, rows, columns, rowKey, rowTo, onOpen, chosen, sort: given, onSort, empty, dense = false, className = '' }: TableProps<Row>) {
  const [own, setOwn] = useState<Sort | null>(null)
  const [at, setAt] = useState<string | null>(null)
  const sort = given === undefined ? own : given
  const setSort = onSort ?? setOwn
  const sorted = sortRows(rows, columns, sort)
  const places = new Map(columns.filter((c) => c.decimal).map((c) => [c.key, decimalPlaces(rows, c)]))

  const printing = usePrinting()
  const long = sorted.length > mostRowsInPage && !printing
  const first = (count: number): RowWindow => ({ shown: Array.from({ length: Math.min(count, sorted.length) }, (_, index) => ({ index })), before: 0, after: 0, widths: null, goTo: null })

  const draw = (holder: Ref<HTMLDivElement>, { shown: given, before, after, widths, goTo }: RowWindow) => {
    // A filter may have shortened the table since its rows were placed.
    const shown = given.filter(({ index }) => index < sorted.length)
    const inPage = shown.map(({ index }) => rowKey(sorted[index]))
    const tabKey = at !== null && inPage.includes(at) ? at : (inPage[0] ?? null)
    const onKeyDown = (event: KeyboardEvent<HTMLTableSectionElement>) => {
      const end = event.key === 'Home' ? 0 : event.key === 'End' ? sorted.length - 1 : null
      if (goTo === null || end === null || isEdited(event.target as HTMLElement)) return moveByRow(event)
      event.preventDefault()
      goTo(end)
    }
    return (
      <div ref={holder} className={`table-frame ${className}`}>
        <table className={dense ? 'table table-dense' : 'table'} aria-label={label} aria-rowcount={long ? sorted.length + 1 : undefined} style={widths ? { tableLayout: 'fixed' } : undefined}>
          <TableHead columns={columns} widths={widths} sort={sort} onSort={setSort} />
          <tbody onKeyDown={onKeyDown}>
            {before > 0 && <Gap height={before} columns={columns.length} />}
            {shown.map(({ index, ref }) => {
              const row = sorted[index]
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
                  inWindow={ref && { index, ref }}
                />
              )
            })}
            {after > 0 && <Gap height={after} columns={columns.length} />}
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
  if (!long) return draw(null, first(sorted.length))
  return (
    <Suspense fallback={draw(null, first(40))}>
      <LongTable count={sorted.length} columns={columns.length} rowHeight={dense ? 27 : 33} draw={draw} />
    </Suspense>
  )
}

/** The room of rows that are not in the page. */
const Gap = ({ height, columns }: { height: number; columns: number }) => (
  <tr aria-hidden="true" className="table-gap">
    <td colSpan={columns} style={{ height }} />
  </tr>
)

const isEdited = (target: HTMLElement) => target.closest('input, textarea, select, [role="slider"], [role="menu"]') !== null

/** ↑ ↓ Home End between the rows' handles: the link of the first cell, or the row itself. Not while a field in the row is edited. */
function moveByRow(event: KeyboardEvent<HTMLTableSectionElement>) {
  const target = event.target as HTMLElement
  if (isEdited(target)) return
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
