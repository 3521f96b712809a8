import { useId, useState } from 'react'
import { inUnit, readTypedQuantity } from '../display-unit.ts'
import { shownValue, valueText } from '../typed-value.ts'

export interface QuantityInputProps {
  label: string
  value: number | string | undefined
  /** as it is stored */
  unit: string | null
  /** as it is shown, and taken when typed without a unit */
  shownIn?: string | null
  changed: boolean
  choices?: readonly string[]
  /** an empty field takes the value away */
  mayBeEmpty: boolean
  autoFocus?: boolean
  /** null: read only */
  onSettle: ((value: number | string | undefined) => void) | null
}

/** A quantity typed in a table, in its own unit or another of the same kind ("0.42 mH"). Settled on Enter or leaving; Esc takes it back. */
export function QuantityInput({ label, value, unit, shownIn = unit, changed, choices, mayBeEmpty, autoFocus = false, onSettle }: QuantityInputProps) {
  const [typed, setTyped] = useState<string | null>(null)
  const [error, setError] = useState<string | null>(null)
  const id = useId()
  const shown = typeof value === 'number' ? inUnit(value, unit, shownIn) : value
  const tone = changed ? 'font-medium text-brass' : ''
  if (!onSettle) return <span className={`num ${tone}`}>{shown === undefined ? '' : shownValue(shown)}</span>
  if (choices)
    return (
      <select aria-label={label} className={`bg-transparent ${tone}`} value={String(value ?? '')} onChange={(e) => onSettle(e.target.value)}>
        {choices.map((c) => (
          <option key={c} className="bg-sheet text-ink">
            {c}
          </option>
        ))}
      </select>
    )
  const settle = () => {
    if (typed === null) return
    const text = typed.trim()
    if (text === '') {
      if (mayBeEmpty) onSettle(undefined)
      setTyped(null)
      setError(null)
      return
    }
    const read = readTypedQuantity(text, unit, shownIn)
    if (read.kind === 'refused' || typeof read.value !== 'number') {
      setError(read.kind === 'refused' ? read.message : 'This has more digits than a model value holds.')
      return
    }
    setTyped(null)
    setError(null)
    onSettle(read.value)
  }
  return (
    <span className="relative inline-block">
      <input
        aria-label={label}
        className={`num w-[12ch] rounded border border-transparent bg-transparent px-1 text-right hover:border-hairline focus:border-rule focus:bg-sheet ${tone} ${error ? '!border-oxide' : ''}`}
        inputMode="decimal"
        autoComplete="off"
        spellCheck={false}
        autoFocus={autoFocus}
        placeholder={mayBeEmpty ? '–' : undefined}
        aria-invalid={error ? true : undefined}
        aria-describedby={error ? id : undefined}
        value={typed ?? valueText(shown)}
        onChange={(e) => {
          setTyped(e.target.value)
          setError(null)
        }}
        onBlur={settle}
        onKeyDown={(e) => {
          if (e.key === 'Enter') settle()
          if (e.key === 'Escape') {
            setTyped(null)
            setError(null)
          }
        }}
      />
      {error && (
        <span id={id} role="alert" className="field-error absolute top-full right-0 z-10 w-56 border border-oxide bg-sheet px-2 py-1 text-left whitespace-normal">
          {error} {shown === undefined ? '' : `${shownValue(shown)} is kept.`}
        </span>
      )}
    </span>
  )
}
