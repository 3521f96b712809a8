import { useId } from 'react'
import type { ComponentProps, ReactNode } from 'react'

export interface CheckboxProps extends Omit<ComponentProps<'input'>, 'type' | 'checked' | 'onChange' | 'className' | 'children'> {
  label: ReactNode
  checked: boolean
  onChange: (checked: boolean) => void
  help?: ReactNode
  error?: string | null
  className?: string
}

export function Checkbox({ label, checked, onChange, help, error, className = '', ...rest }: CheckboxProps) {
  const id = useId()
  const describedBy = [error ? `${id}-error` : '', help ? `${id}-help` : ''].filter(Boolean).join(' ') || undefined
  return (
    <div className={className}>
      <div className="flex items-start gap-[10px]">
        <input {...rest} id={id} type="checkbox" className="tick mt-px" checked={checked} aria-describedby={describedBy} aria-invalid={error ? true : undefined} onChange={(e) => onChange(e.target.checked)} />
        <label htmlFor={id}>{label}</label>
      </div>
      {error && (
        <p className="field-error ml-7" id={`${id}-error`} role="alert">
          {error}
        </p>
      )}
      {help && (
        <p className="help ml-7" id={`${id}-help`}>
          {help}
        </p>
      )}
    </div>
  )
}
