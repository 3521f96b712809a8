import { useId, useState } from 'react'

export interface PlainInputProps {
  label: string
  value: string
  mono?: boolean
  placeholder?: string
  className?: string
  pattern?: RegExp
  /** words when the pattern does not fit */
  wrong?: string
  /** null: read only */
  onSettle: ((text: string) => void) | null
}

/** A short text edited where it stands in a table: Enter or leaving settles, Esc takes it back. */
export function PlainInput({ label, value, mono = false, placeholder, className = '', pattern, wrong = '', onSettle }: PlainInputProps) {
  const [typed, setTyped] = useState<string | null>(null)
  const [error, setError] = useState(false)
  const id = useId()
  if (!onSettle) return <span className={`${mono ? 'num' : ''} ${className}`}>{value || placeholder}</span>
  const settle = () => {
    if (typed === null) return
    const text = typed.trim()
    if (text !== '' && pattern && !pattern.test(text)) return setError(true)
    if (text !== value) onSettle(text)
    setTyped(null)
    setError(false)
  }
  return (
    <>
      <input
        aria-label={label}
        className={`w-[14ch] rounded border border-transparent bg-transparent px-1 hover:border-hairline focus:border-rule focus:bg-sheet ${mono ? 'num' : ''} ${error ? '!border-oxide' : ''} ${className}`}
        maxLength={80}
        placeholder={placeholder}
        autoComplete="off"
        spellCheck={false}
        aria-invalid={error || undefined}
        aria-describedby={error ? id : undefined}
        value={typed ?? value}
        onChange={(e) => {
          setTyped(e.target.value)
          setError(false)
        }}
        onBlur={settle}
        onKeyDown={(e) => {
          if (e.key === 'Enter') settle()
          if (e.key === 'Escape') {
            setTyped(null)
            setError(false)
          }
        }}
      />
      {error && (
        <span id={id} role="alert" className="field-error block max-w-56 whitespace-normal">
          {wrong} {value ? `${value} is kept.` : ''}
        </span>
      )}
    </>
  )
}
