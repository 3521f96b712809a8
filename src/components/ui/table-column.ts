import type { ReactNode } from 'react'

export interface Column<Row> {
  key: string
  head: ReactNode
  /** Under the heading, quiet. */
  unit?: ReactNode
  /** What stands in the cell. */
  cell?: (row: Row) => ReactNode
  /** Instead: a formatted number, set on its decimal point with the others of the column. */
  decimal?: (row: Row) => string | null
  align?: 'start' | 'end'
  /** Makes the column sortable. Null sorts last either way. */
  sortBy?: (row: Row) => string | number | null
  width?: string
  /** Class of the cell: "num", "text-ink-2". */
  className?: string
}

export interface Sort {
  key: string
  descending: boolean
}
