import { memo, useEffect, useRef, useState } from 'react'
import type { Dispatch, KeyboardEvent } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import type { GridAct } from '../grid-state.ts'
import { shownValue } from '../typed-value.ts'
import { useTypedValue } from '../use-typed-value.ts'
import type { ValueAt } from '../value-cells.ts'

export interface ValueGridCellProps {
  row: number
  column: number
  /** null where the firmware version has no such parameter */
  at: ValueAt | null
  label: string
  /** of the row; a cell in another one says so */
  unit: string | null
  /** keys act on it */
  chosen: boolean
  selected: boolean
  emphasised: boolean
  /** the first column of a family */
  begins: boolean
  /** a finding outside policy is about it */
  outside: boolean
  editing: boolean
  first: string | null
  /** of the whole table */
  rows: number
  columns: number
  dispatch: Dispatch<GridAct>
  /** null: read only */
  onEdit: ((edits: Edit[]) => void) | null
}

/** One value of the table. Drawn again only when something of it alters: there are many. */
export const ValueGridCell = memo(function ValueGridCell(props: ValueGridCellProps) {
  const { at, row, column, label, chosen, dispatch } = props
  if (at) return <FilledCell {...props} at={at} />
  return (
    <td role="gridcell" aria-colindex={column + 2} data-cell={`${row} ${column}`} tabIndex={chosen ? 0 : -1} onFocus={() => dispatch({ kind: 'choose', row, column })} className={`end text-ink-2 ${ground(props)}`} aria-label={`${label}: not in its firmware version`}>
      <span aria-hidden="true">·</span>
    </td>
  )
})

const ground = ({ selected, emphasised, begins, chosen }: ValueGridCellProps) => `${selected ? 'bg-brass-wash' : emphasised ? 'bg-sheet' : ''} ${begins ? 'border-l border-l-rule' : ''} ${chosen ? 'focus:bg-brass-wash' : ''}`

function FilledCell(props: ValueGridCellProps & { at: ValueAt }) {
  const { row, column, at, label, unit, chosen, selected, outside, editing, first, dispatch, onEdit } = props
  const size = { rows: props.rows, columns: props.columns }
  const typed = useTypedValue(at, onEdit ?? nothing)
  const inherited = at.own === undefined
  const begin = (text: string | null) => onEdit && dispatch({ kind: 'begin', first: text })
  const onKey = (event: KeyboardEvent) => {
    if (editing || event.ctrlKey || event.metaKey || event.altKey) return
    if (event.key === 'Enter' || event.key === 'F2') {
      event.preventDefault()
      begin(null)
    } else if (event.key === 'Delete' || event.key === 'Backspace') typed.cancel()
    else if (/^[\d.+\-\u2212]$/.test(event.key) && !at.parameter.choices && at.parameter.kind !== 'boolean') {
      event.preventDefault()
      begin(event.key)
    }
  }
  const bad = typed.error !== null
  return (
    <td
      role="gridcell"
      aria-colindex={column + 2}
      aria-selected={chosen || selected}
      data-cell={`${row} ${column}`}
      tabIndex={chosen ? 0 : -1}
      aria-label={editing ? undefined : `${label}: ${shownValue(at.value)}, from ${at.origin}${at.changed ? `, released ${shownValue(at.released)}` : ''}${outside ? ', outside policy' : ''}${bad ? `, ${typed.error}` : ''}`}
      aria-invalid={bad || undefined}
      className={`end relative ${ground(props)} ${bad ? 'shadow-[inset_3px_0_0_var(--oxide)]' : ''}`}
      onMouseDown={(event) => {
        if (editing || event.button !== 0) return
        if (!event.shiftKey) {
          dispatch({ kind: 'choose', row, column, anew: true })
          return
        }
        // The focus stays where it is, so that the block reaches from there to here.
        event.preventDefault()
        dispatch({ kind: 'choose', row, column, extend: true })
      }}
      onFocus={() => dispatch({ kind: 'choose', row, column })}
      onKeyDown={onKey}
      onDoubleClick={() => begin(null)}
    >
      {editing ? (
        <CellEditor
          at={at}
          label={label}
          begun={first ?? typed.text}
          whole={first === null}
          onType={typed.type}
          onDone={(text, way) => {
            const taken = typed.settle(text)
            if (way === 'leave') dispatch({ kind: 'leave' })
            else if (taken) dispatch({ kind: 'end', way, size })
          }}
          onCancel={() => {
            typed.cancel()
            dispatch({ kind: 'end', way: 'stay', size })
          }}
        />
      ) : (
        <span className={`inline-flex items-center justify-end gap-[5px] ${at.changed ? 'text-brass' : inherited && at.place.kind === 'joint' ? 'text-ink-2' : ''}`}>
          {outside && (
            <FindingMark level="concession needed" size={10}>
              {null}
            </FindingMark>
          )}
          <span className={`num ${at.changed || (!inherited && at.place.kind === 'joint') ? 'font-medium' : ''}`}>{typed.typing ? typed.text : shownValue(at.value)}</span>
          {at.parameter.unit !== unit && <span className="unit text-12">{at.parameter.unit}</span>}
          <OriginMark origin={at.origin}>{null}</OriginMark>
        </span>
      )}
      {bad && (
        <span role="alert" className="field-error absolute top-full right-0 z-10 w-64 border border-oxide bg-sheet px-2 py-1 text-left whitespace-normal">
          {typed.error}
        </span>
      )}
    </td>
  )
}

const nothing = () => {}

interface CellEditorProps {
  at: ValueAt
  label: string
  begun: string
  whole: boolean
  onType: (text: string) => void
  onDone: (text: string, way: 'down' | 'right' | 'left' | 'stay' | 'leave') => void
  onCancel: () => void
}

function CellEditor({ at, label, begun, whole, onType, onDone, onCancel }: CellEditorProps) {
  const [text, setText] = useState(begun)
  const input = useRef<HTMLInputElement & HTMLSelectElement>(null)
  const done = useRef(false)
  useEffect(() => {
    input.current?.focus()
    if (whole && input.current && 'select' in input.current) input.current.select?.()
  }, [whole])
  const choices = at.parameter.choices?.map(String) ?? (at.parameter.kind === 'boolean' ? ['on', 'off'] : null)
  const finish = (way: 'down' | 'right' | 'left' | 'stay' | 'leave', value = text) => {
    done.current = true
    onDone(value, way)
    done.current = false
  }
  const onKey = (event: KeyboardEvent) => {
    if (event.key === 'Escape') {
      event.preventDefault()
      done.current = true
      onCancel()
    } else if (event.key === 'Enter') {
      event.preventDefault()
      finish('down')
    } else if (event.key === 'Tab') {
      event.preventDefault()
      finish(event.shiftKey ? 'left' : 'right')
    }
    event.stopPropagation()
  }
  if (choices)
    return (
      <select
        ref={input}
        aria-label={label}
        className="w-full bg-sheet"
        value={text}
        onKeyDown={onKey}
        onBlur={() => done.current || onDone(text, 'leave')}
        onChange={(e) => {
          setText(e.target.value)
          finish('stay', e.target.value)
        }}
      >
        {choices.map((c) => (
          <option key={c}>{c}</option>
        ))}
      </select>
    )
  return (
    <input
      ref={input}
      aria-label={label}
      className="num w-full min-w-[7ch] bg-sheet text-right"
      inputMode="decimal"
      autoComplete="off"
      spellCheck={false}
      value={text}
      onKeyDown={onKey}
      onBlur={() => done.current || onDone(text, 'leave')}
      onChange={(e) => {
        setText(e.target.value)
        onType(e.target.value)
      }}
    />
  )
}
