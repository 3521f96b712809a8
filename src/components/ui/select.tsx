import type { ComponentProps } from 'react'
import { Chevron } from './chevron.tsx'
import { Field } from './field.tsx'
import type { FieldFrame } from './field.tsx'

export interface SelectOption<V extends string> {
  value: V
  label: string
  disabled?: boolean
}

export interface SelectProps<V extends string> extends FieldFrame, Omit<ComponentProps<'select'>, 'value' | 'onChange' | 'className' | 'children'> {
  value: V | ''
  onChange: (value: V) => void
  options: readonly SelectOption<V>[]
  /** Shown while nothing is chosen. */
  placeholder?: string
  width?: number | string
}

export function Select<V extends string>({ label, help, error, below, hideLabel, className, width, value, onChange, options, placeholder, ...rest }: SelectProps<V>) {
  return (
    <Field label={label} help={help} error={error} below={below} hideLabel={hideLabel} className={className} width={width}>
      {(control) => (
        <div className={`box ${error ? 'box-bad' : ''} ${rest.disabled ? 'box-off' : ''}`}>
          <select {...rest} {...control} value={value} onChange={(e) => onChange(e.target.value as V)}>
            {placeholder !== undefined && (
              <option value="" disabled>
                {placeholder}
              </option>
            )}
            {options.map((o) => (
              <option key={o.value} value={o.value} disabled={o.disabled}>
                {o.label}
              </option>
            ))}
          </select>
          <Chevron />
        </div>
      )}
    </Field>
  )
}
