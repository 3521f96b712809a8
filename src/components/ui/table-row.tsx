import type { MouseEvent } from 'react'
import { Link, useNavigate } from 'react-router'
import { DecimalText } from './decimal-text.tsx'
import type { Column } from './table-column.ts'

export interface TableRowProps<Row> {
  row: Row
  columns: readonly Column<Row>[]
  places: ReadonlyMap<string, number>
  to?: string
  onOpen?: () => void
  chosen: boolean
  inTabOrder: boolean
  onFocus: () => void
  /** of a long table: the row's place in it, and who measures its height */
  inWindow?: { index: number; ref: (row: HTMLTableRowElement | null) => void }
}

export function TableRow<Row>(props: TableRowProps<Row>) {
  return props.to === undefined ? <PlainRow {...props} open={props.onOpen} /> : <LinkedRow {...props} to={props.to} />
}

/** Apart, so that a table without links needs no router around it. */
function LinkedRow<Row>(props: TableRowProps<Row> & { to: string }) {
  const navigate = useNavigate()
  return <PlainRow {...props} open={() => navigate(props.to)} />
}

function PlainRow<Row>({ row, columns, places, to, open, chosen, inTabOrder, onFocus, inWindow }: TableRowProps<Row> & { open?: () => void }) {
  const tabIndex = inTabOrder ? 0 : -1
  // A press anywhere in the row opens it, but not one on a link or control of its own, nor a selection of text.
  const onClick = (event: MouseEvent<HTMLTableRowElement>) => {
    const own = (event.target as HTMLElement).closest('a, button, input, select, textarea, label, [role="slider"]')
    if (!own && !window.getSelection()?.toString()) open?.()
  }
  return (
    <tr
      ref={inWindow?.ref}
      data-index={inWindow?.index}
      aria-rowindex={inWindow && inWindow.index + 2}
      className={[chosen ? 'chosen' : '', open ? 'opens' : ''].join(' ')}
      aria-selected={chosen || undefined}
      onFocus={onFocus}
      onClick={open ? onClick : undefined}
      {...(open ? {} : { tabIndex, 'data-row-handle': true })}
    >
      {columns.map((c, i) => {
        const inside = c.decimal ? <DecimalText text={c.decimal(row)} places={places.get(c.key) ?? 0} /> : c.cell?.(row)
        return (
          <td key={c.key} className={[c.decimal || c.align === 'end' ? 'end' : '', c.className ?? ''].join(' ')}>
            {i > 0 || !open ? inside : to === undefined ? (
              <button type="button" className="row-link" data-row-handle tabIndex={tabIndex} onClick={open}>
                {inside}
              </button>
            ) : (
              <Link to={to} className="row-link" data-row-handle tabIndex={tabIndex}>
                {inside}
              </Link>
            )}
          </td>
        )
      })}
    </tr>
  )
}
