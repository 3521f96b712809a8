import type { Column, Sort } from './table-column.ts'

export interface TableHeadProps<Row> {
  columns: readonly Column<Row>[]
  /** px, of a long table whose columns must not move */
  widths?: readonly number[] | null
  sort: Sort | null
  onSort: (sort: Sort | null) => void
}

/** Column headings; a sortable one is a button: up, down, as it came. */
export function TableHead<Row>({ columns, widths, sort, onSort }: TableHeadProps<Row>) {
  const next = (key: string): Sort | null => (sort?.key !== key ? { key, descending: false } : sort.descending ? null : { key, descending: true })
  return (
    <thead>
      <tr>
        {columns.map((c, i) => {
          const sorted = sort?.key === c.key ? (sort.descending ? 'descending' : 'ascending') : undefined
          const words = (
            <>
              {c.head}
              {c.unit && <span className="unit block font-normal">{c.unit}</span>}
            </>
          )
          return (
            <th key={c.key} scope="col" className={c.decimal || c.align === 'end' ? 'end' : ''} style={{ width: widths?.[i] ?? c.width }} aria-sort={sorted}>
              {c.sortBy ? (
                <button type="button" className="sort" onClick={() => onSort(next(c.key))}>
                  <span>{words}</span>
                  <svg width="8" height="10" viewBox="0 0 8 10" aria-hidden="true">
                    <path d="M1 4l3-3 3 3" fill="none" strokeWidth="1.4" stroke={sorted === 'ascending' ? 'var(--ink)' : 'var(--hairline)'} />
                    <path d="M1 6.5l3 3 3-3" fill="none" strokeWidth="1.4" stroke={sorted === 'descending' ? 'var(--ink)' : 'var(--hairline)'} />
                  </svg>
                </button>
              ) : (
                words
              )}
            </th>
          )
        })}
      </tr>
    </thead>
  )
}
