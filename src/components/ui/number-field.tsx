import type { KeyboardEvent } from 'react'
import { stepNumberText } from '../../lib/format.ts'
import { TextField } from './text-field.tsx'
import type { TextFieldProps } from './text-field.tsx'

export interface NumberFieldProps extends Omit<TextFieldProps, 'mono' | 'type' | 'inputMode'> {
  /** Arrow keys move by this much, with Shift by ten times as much. Without it they do nothing. */
  step?: number
  /** Enter, or the field left after a change. */
  onSettle?: (text: string) => void
}

/** A number as typed. The text is kept exactly; judging it is the caller's (parseNumber in lib/format.ts). */
export function NumberField({ step, onSettle, value, onChange, onKeyDown, onBlur, ...rest }: NumberFieldProps) {
  const onKey = (event: KeyboardEvent<HTMLInputElement>) => {
    onKeyDown?.(event)
    if (event.defaultPrevented) return
    if (event.key === 'Enter') onSettle?.(value)
    const direction = event.key === 'ArrowUp' ? 1 : event.key === 'ArrowDown' ? -1 : 0
    if (step === undefined || direction === 0) return
    const next = stepNumberText(value, direction * step * (event.shiftKey ? 10 : 1))
    if (next === null) return
    event.preventDefault()
    onChange(next)
  }
  return (
    <TextField
      {...rest}
      mono
      inputMode="decimal"
      autoComplete="off"
      spellCheck={false}
      value={value}
      onChange={onChange}
      onKeyDown={onKey}
      onBlur={(event) => {
        onBlur?.(event)
        onSettle?.(value)
      }}
    />
  )
}
