import { TextField } from '../../../components/ui/text-field.tsx'

export interface CodeFieldProps {
  label?: string
  value: string
  onChange: (code: string) => void
  error?: string | null
  /** only a code of the app does, as when it is set up */
  appOnly?: boolean
  autoFocus?: boolean
}

/** A code of the second factor. Browsers offer to fill it from where they keep one. */
export function CodeField({ label = 'Code', value, onChange, error, appOnly = false, autoFocus = false }: CodeFieldProps) {
  return (
    <TextField
      label={label}
      mono
      width={appOnly ? 140 : 300}
      autoComplete="one-time-code"
      inputMode={appOnly ? 'numeric' : 'text'}
      autoCapitalize="characters"
      spellCheck={false}
      maxLength={40}
      autoFocus={autoFocus}
      value={value}
      onChange={onChange}
      error={error}
      help={appOnly ? 'six digits, as your app shows them' : 'six digits of your app, or a recovery code'}
    />
  )
}
