import type { ComponentProps, ReactNode } from 'react'
import { Field } from './field.tsx'
import type { FieldFrame } from './field.tsx'

export interface TextFieldProps extends FieldFrame, Omit<ComponentProps<'input'>, 'onChange' | 'className' | 'width' | 'children'> {
  value: string
  onChange: (text: string) => void
  /** Inside the box, after the text. */
  unit?: ReactNode
  width?: number | string
  /** Fira Mono: for serial numbers, versions, addresses. */
  mono?: boolean
}

export function TextField({ label, help, error, below, hideLabel, className, width, unit, mono = false, value, onChange, disabled, ...rest }: TextFieldProps) {
  return (
    <Field label={label} help={help} error={error} below={below} hideLabel={hideLabel} className={className} width={width}>
      {(control) => (
        <div className={['box', error ? 'box-bad' : '', disabled ? 'box-off' : ''].join(' ')}>
          <input type="text" {...rest} {...control} disabled={disabled} className={mono ? 'num' : ''} value={value} onChange={(e) => onChange(e.target.value)} />
          {unit && <span className="unit">{unit}</span>}
        </div>
      )}
    </Field>
  )
}
