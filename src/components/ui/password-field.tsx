import { useState } from 'react'
import type { ComponentProps } from 'react'
import { Field } from './field.tsx'
import type { FieldFrame } from './field.tsx'

export interface PasswordFieldProps extends FieldFrame, Omit<ComponentProps<'input'>, 'onChange' | 'className' | 'type' | 'width' | 'children'> {
  value: string
  onChange: (text: string) => void
  width?: number | string
  /** A new password is offered to the reader's password store, a present one is filled from it. */
  purpose: 'present' | 'new'
}

/** Paste is allowed, and the password can be shown. */
export function PasswordField({ label, help, error, below, hideLabel, className, width, purpose, value, onChange, ...rest }: PasswordFieldProps) {
  const [shown, setShown] = useState(false)
  return (
    <Field label={label} help={help} error={error} below={below} hideLabel={hideLabel} className={className} width={width}>
      {(control) => (
        <div className={`box ${error ? 'box-bad' : ''}`}>
          <input
            {...rest}
            {...control}
            type={shown ? 'text' : 'password'}
            autoComplete={purpose === 'new' ? 'new-password' : 'current-password'}
            autoCapitalize="none"
            spellCheck={false}
            value={value}
            onChange={(e) => onChange(e.target.value)}
          />
          <button type="button" className="link text-13" aria-pressed={shown} onClick={() => setShown(!shown)}>
            {shown ? 'hide' : 'show'}
            <span className="sr-only"> password</span>
          </button>
        </div>
      )}
    </Field>
  )
}
