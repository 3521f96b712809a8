import type { ComponentProps } from 'react'
import { Field } from './field.tsx'
import type { FieldFrame } from './field.tsx'

export interface TextAreaProps extends FieldFrame, Omit<ComponentProps<'textarea'>, 'onChange' | 'className' | 'children'> {
  value: string
  onChange: (text: string) => void
}

export function TextArea({ label, help, error, below, hideLabel, className, value, onChange, rows = 3, ...rest }: TextAreaProps) {
  return (
    <Field label={label} help={help} error={error} below={below} hideLabel={hideLabel} className={className}>
      {(control) => <textarea {...rest} {...control} rows={rows} className={`area ${error ? 'box-bad' : ''}`} value={value} onChange={(e) => onChange(e.target.value)} />}
    </Field>
  )
}
