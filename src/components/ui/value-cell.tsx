import { useId } from 'react'
import type { KeyboardEvent, ReactNode } from 'react'
import { stepNumberText } from '../../lib/format.ts'
import { HelpButton } from './help-button.tsx'
import { OriginMark } from './origin-mark.tsx'
import type { Origin } from './origin-mark.tsx'
import { Ruler } from './ruler.tsx'
import type { RulerProps } from './ruler.tsx'

export interface ValueCellProps {
  title: string
  /** topic of its explanation, shared/help */
  help?: string
  /** The value as typed; text, so that its digits stay. */
  value: string
  unit?: string
  origin: Origin
  /** Change from the released value in percent, signed: "+75.0". */
  change?: string | null
  changed?: boolean
  /** Range, notch and hatches; without it no ruler is drawn. */
  ruler?: Omit<RulerProps, 'label' | 'unit' | 'width' | 'figures' | 'id'>
  /** Makes the number a field and the ruler a slider. */
  onChange?: (text: string) => void
  onSettle?: (text: string) => void
  /** Esc in the field: what was typed is taken back. */
  onCancel?: () => void
  /** Writes a value the ruler gives as text; three significant digits unless given. */
  write?: (value: number) => string
  /** Arrow keys in the field. */
  step?: number
  chosen?: boolean
  onFocus?: () => void
  error?: string | null
  /** Under the ruler: how many joints have a value of their own, the register's rounding. */
  note?: ReactNode
}

/** One value where it acts: name, change, number, unit, origin, and the ruler of what it may be. */
export function ValueCell({ title, help, value, unit = '', origin, change, changed = false, ruler, onChange, onSettle, onCancel, write = toText, step, chosen = false, onFocus, error, note }: ValueCellProps) {
  const id = useId()
  const classes = ['value-cell', changed ? 'value-cell-changed' : '', chosen ? 'value-cell-chosen' : ''].filter(Boolean).join(' ')
  const onKey = (event: KeyboardEvent) => {
    if (event.key === 'Enter') onSettle?.(value)
    if (event.key === 'Escape') onCancel?.()
    const way = event.key === 'ArrowUp' ? 1 : event.key === 'ArrowDown' ? -1 : 0
    const next = step === undefined || way === 0 ? null : stepNumberText(value, way * step * (event.shiftKey ? 10 : 1))
    if (next === null) return
    event.preventDefault()
    onChange?.(next)
  }
  return (
    <div className={classes} onFocus={onFocus}>
      <div className="flex justify-between gap-2 text-13">
        <span className="inline-flex items-baseline gap-[5px]">
          <label htmlFor={onChange ? id : undefined}>{title}</label>
          {help && <HelpButton topic={help} about={title} />}
        </span>
        {change && (
          <span className="num text-12 whitespace-nowrap">
            {change}
            <span className="unit ml-[.22em]">%</span>
          </span>
        )}
      </div>
      <div className="flex items-baseline gap-[5px]">
        <span className={`flex min-w-0 items-baseline text-20 leading-7 ${changed ? 'text-brass' : ''}`}>
          {onChange ? (
            <input
              id={id}
              className="num font-medium"
              style={{ width: `${Math.max(1, value.length)}ch` }}
              inputMode="decimal"
              autoComplete="off"
              spellCheck={false}
              value={value}
              aria-invalid={error ? true : undefined}
              aria-describedby={error ? `${id}-error` : undefined}
              onChange={(e) => onChange(e.target.value)}
              onKeyDown={onKey}
              onBlur={() => onSettle?.(value)}
            />
          ) : (
            <span className="num font-medium">{value}</span>
          )}
        </span>
        {unit && <span className="unit text-13 whitespace-nowrap">{unit}</span>}
        <span className="flex-1" />
        <OriginMark origin={origin} />
      </div>
      {ruler && <Ruler {...ruler} label={title} unit={unit} onChange={onChange && ((v) => onChange(write(v)))} onSettle={onSettle && ((v) => onSettle(write(v)))} />}
      {error && (
        <p className="field-error" id={`${id}-error`} role="alert">
          {error}
        </p>
      )}
      {note && <p className="text-12 text-ink-2">{note}</p>}
    </div>
  )
}

function toText(value: number): string {
  return String(Number(value.toPrecision(3)))
}
