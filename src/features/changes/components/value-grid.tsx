import { useEffectEvent, useLayoutEffect, useMemo, useReducer, useRef } from 'react'
import type { ClipboardEvent, KeyboardEvent } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../../shared/registers/parameter-schema.ts'
import { gridState, moveOf, selectionOf, startAt, type GridState } from '../grid-state.ts'
import { shownValue, valueText } from '../typed-value.ts'
import { useColumnWindow } from '../use-column-window.ts'
import { editTo } from '../use-typed-value.ts'
import { isOutOfPolicy, rowId, type Column, type TableCells } from '../value-table.ts'
import { GridHead, gridWidths } from './grid-head.tsx'
import { ValueGridCell } from './value-grid-cell.tsx'

export interface ValueGridProps {
  label: string
  set: MachineSet
  columns: readonly Column[]
  groups: readonly { law: string; rows: readonly Parameter[] }[]
  cells: TableCells
  /** values outside policy, as "joint\nparameter" */
  out: ReadonlySet<string>
  /** its column stands out */
  joint: string | null
  /** key of the column that is looked at first */
  at: string
  /** null: read only */
  onEdit: ((edits: Edit[]) => void) | null
  /** told where keys act */
  onChosen: (state: GridState) => void
  onPaste: (text: string) => void
  onFill: () => void
}

/**
 * Values of many joints: parameters in rows by law, families and joints in columns. A grid as in the WAI-ARIA APG: arrows move, with Shift they select,
 * Enter or a digit edits, Esc leaves, Delete sets back to what is inherited; a selection is copied as a spreadsheet takes it, and a block of one is pasted.
 * Of many columns only those in sight are drawn.
 */
export function ValueGrid({ label, set, columns, groups, cells, out, joint, at, onEdit, onChosen, onPaste, onFill }: ValueGridProps) {
  // Keys act first where one looked before: on the joint or family of the address.
  const [state, dispatch] = useReducer(gridState, Math.max(0, columns.findIndex((c) => c.key === at)), startAt)
  const frame = useRef<HTMLDivElement>(null)
  const rows = useMemo(() => groups.flatMap((g) => g.rows), [groups])
  const numberOf = useMemo(() => new Map(rows.map((r, i) => [rowId(r), i])), [rows])
  const size = { rows: rows.length, columns: columns.length }
  const row = Math.min(state.row, rows.length - 1)
  const column = Math.min(state.column, columns.length - 1)
  const spans = useColumnWindow(frame, columns.length, gridWidths, column)
  const selection = selectionOf({ ...state, row, column })
  const several = selection.top !== selection.bottom || selection.left !== selection.right

  useLayoutEffect(() => {
    // The column begun at stands beside the head of its rows.
    if (frame.current) frame.current.scrollLeft = Math.max(0, column - 1) * gridWidths.column
    // Once: from here on the reader scrolls.
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, [])
  const tell = useEffectEvent(onChosen)
  useLayoutEffect(() => tell({ ...state, row, column }), [state, row, column])
  useLayoutEffect(() => {
    if (state.focus > 0) frame.current?.querySelector<HTMLElement>(`[data-cell="${row} ${column}"]`)?.focus()
    // Only a move asks for the focus.
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, [state.focus])

  const selected = () => rows.slice(selection.top, selection.bottom + 1).map((p) => columns.slice(selection.left, selection.right + 1).map((c) => cells.at(c, p)))
  const clear = () => {
    const edits = selected().flat().flatMap((at) => (at ? (editTo(at, undefined) ?? []) : []))
    if (edits.length > 0) onEdit?.(edits)
  }
  const onKey = (event: KeyboardEvent) => {
    if (event.defaultPrevented || state.editing || event.altKey) return
    if ((event.ctrlKey || event.metaKey) && event.key.toLowerCase() === 'd' && onEdit) {
      event.preventDefault()
      onFill()
    }
    if (event.ctrlKey || event.metaKey) return
    if ((event.key === 'Delete' || event.key === 'Backspace') && onEdit) {
      event.preventDefault()
      clear()
      return
    }
    const move = moveOf(event.key, size)
    if (!move) return
    event.preventDefault()
    dispatch({ kind: 'move', ...move, extend: event.shiftKey, size })
  }
  const onCopy = (event: ClipboardEvent) => {
    if (state.editing) return
    event.preventDefault()
    event.clipboardData.setData('text/plain', selected().map((line) => line.map((at) => (at ? valueText(at.value) : '')).join('\t')).join('\n'))
  }
  const onPasted = (event: ClipboardEvent) => {
    if (state.editing || !onEdit) return
    event.preventDefault()
    onPaste(event.clipboardData.getData('text/plain'))
  }

  return (
    <div ref={frame} className="mt-2 max-h-[min(76vh,900px)] overflow-auto border-b border-rule" style={{ scrollPaddingLeft: gridWidths.head, scrollPaddingTop: 76 }}>
      <table
        role="grid"
        aria-label={label}
        aria-readonly={onEdit === null}
        aria-multiselectable="true"
        aria-colcount={columns.length + 1}
        aria-rowcount={rows.length + 1}
        className="table table-dense"
        style={{ tableLayout: 'fixed', width: gridWidths.head + columns.length * gridWidths.column }}
        onKeyDown={onKey}
        onCopy={onCopy}
        onPaste={onPasted}
      >
        <colgroup>
          <col style={{ width: gridWidths.head }} />
          <col span={columns.length} style={{ width: gridWidths.column }} />
        </colgroup>
        <GridHead columns={columns} joint={joint} spans={spans} />
        {groups.map((g) => (
          <tbody key={g.law}>
            <tr>
              <th scope="rowgroup" colSpan={columns.length + 1} className="!border-hairline !pt-3 !text-ink-2">
                <span className="sticky left-[10px]">{g.law}</span>
              </th>
            </tr>
            {g.rows.map((parameter) => {
              const r = numberOf.get(rowId(parameter))!
              return (
                <tr key={rowId(parameter)} aria-rowindex={r + 2}>
                  <td role="rowheader" title={parameter.description || undefined} className="sticky left-0 z-[2] bg-paper">
                    <span className="flex items-baseline justify-between gap-2">
                      <span className="truncate">{parameter.title}</span>
                      <span className="text-12 whitespace-nowrap text-ink-2">{parameter.unit}</span>
                    </span>
                  </td>
                  {spans.flatMap(({ index, gap }) => [
                    gap > 0 && <td key={`gap ${index}`} role="presentation" colSpan={gap} />,
                    index < columns.length && (
                      <ValueGridCell
                        key={columns[index].key}
                        row={r}
                        column={index}
                        at={cells.at(columns[index], parameter)}
                        unit={parameter.unit}
                        label={`${parameter.title}, ${columns[index].title}`}
                        chosen={r === row && index === column}
                        selected={several && r >= selection.top && r <= selection.bottom && index >= selection.left && index <= selection.right}
                        emphasised={columns[index].key === joint}
                        begins={index > 0 && columns[index].place.kind === 'family'}
                        outside={isOutOfPolicy(out, cells.at(columns[index], parameter), set)}
                        editing={state.editing && r === row && index === column}
                        first={state.editing && r === row && index === column ? state.first : null}
                        rows={rows.length}
                        columns={columns.length}
                        dispatch={dispatch}
                        onEdit={onEdit}
                      />
                    ),
                  ])}
                </tr>
              )
            })}
          </tbody>
        ))}
      </table>
      <p className="sr-only" role="status">
        {several ? `${selection.bottom - selection.top + 1} by ${selection.right - selection.left + 1} cells selected, at ${shownValue(cells.at(columns[column], rows[row])?.value)}` : ''}
      </p>
    </div>
  )
}
