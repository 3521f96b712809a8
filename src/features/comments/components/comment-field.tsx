import { useId, useRef, useState, type KeyboardEvent, type RefObject } from 'react'
import { commentLength } from '../../../../shared/contract/comments.ts'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { count } from '../../../lib/format.ts'
import { fitting, named, nameBegun, type Begun } from '../naming.ts'

export interface CommentFieldProps {
  label: string
  value: string
  onChange: (text: string) => void
  people: readonly { id: number; name: string }[]
  error: string | null
  placeholder?: string
  fieldRef: RefObject<HTMLTextAreaElement | null>
  onSend: () => void
  rows?: number
}

const MOST = 6

/** A field in which an at sign names people: a list offers those who fit. A field of several lines may be no combobox (ARIA in HTML), so that it says by itself how many fit. Ctrl Enter sends. */
export function CommentField({ label, value, onChange, people, error, placeholder, fieldRef, onSend, rows = 3 }: CommentFieldProps) {
  const listId = useId()
  const [begun, setBegun] = useState<Begun | null>(null)
  const [at, setAt] = useState(0)
  const offered = begun ? fitting(people, begun.typed).slice(0, MOST) : []
  const open = offered.length > 0
  // The caret can only be set once the field holds the new text.
  const caretDue = useRef<number | null>(null)

  const look = (field: HTMLTextAreaElement) => {
    setBegun(field.selectionStart === field.selectionEnd ? nameBegun(field.value, field.selectionStart) : null)
    setAt(0)
  }
  const choose = (name: string) => {
    const done = named(value, begun!, name)
    caretDue.current = done.caret
    setBegun(null)
    onChange(done.text)
    queueMicrotask(() => {
      fieldRef.current?.focus()
      if (caretDue.current !== null) fieldRef.current?.setSelectionRange(caretDue.current, caretDue.current)
      caretDue.current = null
    })
  }
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key === 'Enter' && (event.ctrlKey || event.metaKey)) onSend()
    else if (open && (event.key === 'Enter' || event.key === 'Tab')) choose(offered[at].name)
    else if (open && event.key === 'ArrowDown') setAt((at + 1) % offered.length)
    else if (open && event.key === 'ArrowUp') setAt((at - 1 + offered.length) % offered.length)
    else if (open && event.key === 'Escape') setBegun(null)
    else return
    event.preventDefault()
  }

  return (
    <div className="relative">
      <TextArea
        ref={fieldRef}
        label={label}
        value={value}
        onChange={onChange}
        maxLength={commentLength}
        rows={rows}
        error={error}
        placeholder={placeholder}
        aria-autocomplete="list"
        aria-haspopup="listbox"
        aria-controls={open ? listId : undefined}
        aria-activedescendant={open ? `${listId}-${offered[at].id}` : undefined}
        onKeyDown={onKeyDown}
        onSelect={(event) => look(event.currentTarget)}
        onBlur={() => setBegun(null)}
      />
      <span role="status" className="sr-only">
        {open && `${count(offered.length, 'person', 'people')} to name; arrows choose, Enter takes`}
      </span>
      {open && (
        <ul id={listId} role="listbox" aria-label="people" className="menu right-0 left-0">
          {offered.map((p, i) => (
            <li
              key={p.id}
              id={`${listId}-${p.id}`}
              role="option"
              aria-selected={i === at}
              className={`menu-item ${i === at ? 'bg-brass-wash' : ''}`}
              onPointerDown={(event) => {
                // Before the field loses the focus.
                event.preventDefault()
                choose(p.name)
              }}
            >
              {p.name}
            </li>
          ))}
        </ul>
      )}
    </div>
  )
}
