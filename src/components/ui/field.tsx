import { useId } from 'react'
import type { ReactNode } from 'react'

/** What every field takes beside its own value. */
export interface FieldFrame {
  label: ReactNode
  /** Quiet words below: register, origin, what is expected. */
  help?: ReactNode
  /** What is wrong, in words; stands beside the box. */
  error?: string | null
  /** Between box and help, as a ruler. */
  below?: ReactNode
  hideLabel?: boolean
  className?: string
}

/** Put these on the control. */
export interface ControlProps {
  id: string
  'aria-describedby'?: string
  'aria-invalid'?: true
}

export interface FieldProps extends FieldFrame {
  children: (control: ControlProps) => ReactNode
  /** Width of the box, so that the error has room beside it. */
  width?: number | string
}

/** Label above, control, error beside in words, help below. */
export function Field({ label, help, error, below, hideLabel = false, className = '', width, children }: FieldProps) {
  const id = useId()
  const helpId = help ? `${id}-help` : undefined
  const errorId = error ? `${id}-error` : undefined
  const describedBy = [errorId, helpId].filter(Boolean).join(' ') || undefined
  return (
    <div className={className}>
      <label className={hideLabel ? 'sr-only' : 'label'} htmlFor={id}>
        {label}
      </label>
      <div className="field-row">
        <div className="field-control" style={width === undefined ? undefined : { flex: 'none', width, maxWidth: '100%' }}>
          {children({ id, 'aria-describedby': describedBy, 'aria-invalid': error ? true : undefined })}
        </div>
        {error && (
          <span className="field-error flex-1 basis-40" id={errorId} role="alert">
            {error}
          </span>
        )}
      </div>
      {below && <div className="mt-1" style={width === undefined ? undefined : { width, maxWidth: '100%' }}>{below}</div>}
      {help && (
        <div className="help" id={helpId}>
          {help}
        </div>
      )}
    </div>
  )
}
