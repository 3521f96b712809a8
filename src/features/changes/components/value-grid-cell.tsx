import { useEffect, useRef, useState } from 'react'
import type { KeyboardEvent } from 'react'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { OriginMark } from '../../../components/ui/origin-mark.tsx'
import { shownValue } from '../typed-value.ts'
import { editTo, useTypedValue } from '../use-typed-value.ts'
import type { ValueAt } from '../value-cells.ts'

export interface ValueGridCellProps {
  id: string
  /** null where the joint's firmware version has no such parameter */
  at: ValueAt | null
  label: string
  inTabOrder: boolean
  emphasised: boolean
  editing: boolean
  onChoose: () => void
  onBegin: (() => void) | null
  onEnd: (way: 'down' | 'right' | 'left' | 'stay') => void
  onLeave: () => void
  onEdit: (edits: Edit[]) => void
}

export function ValueGridCell({ at, ...rest }: ValueGridCellProps) {
  if (!at)
    return (
      <td role="gridcell" data-cell={rest.id} tabIndex={rest.inTabOrder ? 0 : -1} onFocus={rest.onChoose} className="end text-ink-2" aria-label={`${rest.label}: not in its firmware version`}>
        <span aria-hidden="true">·</span>
      </td>
    )
  return <FilledCell at={at} {...rest} />
}

function FilledCell({ id, at, label, inTabOrder, emphasised, editing, onChoose, onBegin, onEnd, onLeave, onEdit }: Omit<ValueGridCellProps, 'at'> & { at: ValueAt }) {
  const typed = useTypedValue(at, onEdit)
  const [first, setFirst] = useState<string | null>(null)
  const inherited = at.own === undefined
  const begin = (text: string | null) => {
    if (!onBegin) return
    setFirst(text)
    onBegin()
  }
  const onKey = (event: KeyboardEvent) => {
    if (editing || event.ctrlKey || event.metaKey || event.altKey) return
    if (event.key === 'Enter' || event.key === 'F2') {
      event.preventDefault()
      begin(null)
    } else if ((event.key === 'Delete' || event.key === 'Backspace') && onBegin) {
      event.preventDefault()
      typed.cancel()
      const edit = editTo(at, undefined)
      if (edit) onEdit([edit])
    } else if (/^[\d.+\-\u2212]$/.test(event.key) && !at.parameter.choices && at.parameter.kind !== 'boolean') {
      event.preventDefault()
      begin(event.key)
    }
  }
  const bad = typed.error !== null
  return (
    <td
      role="gridcell"
      data-cell={id}
      tabIndex={inTabOrder ? 0 : -1}
      aria-label={editing ? undefined : `${label}: ${shownValue(at.value)}, from ${at.origin}${at.changed ? `, released ${shownValue(at.released)}` : ''}${bad ? `, ${typed.error}` : ''}`}
      aria-invalid={bad || undefined}
      className={`end relative ${emphasised ? 'bg-sheet' : ''} ${bad ? 'shadow-[inset_3px_0_0_var(--oxide)]' : ''} ${inTabOrder ? 'focus:bg-brass-wash' : ''}`}
      onFocus={onChoose}
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
            if (way === 'leave') onLeave()
            else if (taken) onEnd(way)
          }}
          onCancel={() => {
            typed.cancel()
            onEnd('stay')
          }}
        />
      ) : (
        <span className={`inline-flex items-center justify-end gap-[5px] ${at.changed ? 'text-brass' : inherited && at.place.kind === 'joint' ? 'text-ink-2' : ''}`}>
          <span className={`num ${at.changed || (!inherited && at.place.kind === 'joint') ? 'font-medium' : ''}`}>{typed.typing ? typed.text : shownValue(at.value)}</span>
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
