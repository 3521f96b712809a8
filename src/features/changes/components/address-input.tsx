import { useId, useState } from 'react'
import { formatHex } from '../../../lib/format.ts'

export interface AddressInputProps {
  label: string
  value: number
  /** other boards of the bus */
  taken: readonly { address: number; name: string }[]
  className?: string
  onSettle: (address: number) => void
}

/** A typed bus address: "0x33" or 51; null when it is none. */
export function readAddress(text: string): number | null {
  const t = text.trim()
  const n = /^0x[0-9a-f]{1,2}$/i.test(t) ? Number.parseInt(t, 16) : /^\d{1,3}$/.test(t) ? Number(t) : NaN
  return Number.isInteger(n) && n >= 0 && n <= 127 ? n : null
}

/** An address typed in hexadecimal or decimal. A doubled one is taken, since two boards may swap, and said at once; the check blocks it. */
export function AddressInput({ label, value, taken, className = '', onSettle }: AddressInputProps) {
  const [typed, setTyped] = useState<string | null>(null)
  const [error, setError] = useState<string | null>(null)
  const id = useId()
  const doubled = taken.find((t) => t.address === value)
  const words = error ?? (doubled ? `${doubled.name} answers there too.` : null)
  const settle = () => {
    if (typed === null) return
    const read = readAddress(typed)
    if (read === null) return setError(`"${typed}" is no address from 0x00 to 0x7F. ${formatHex(value)} is kept.`)
    setTyped(null)
    setError(null)
    onSettle(read)
  }
  return (
    <>
      <input
        aria-label={label}
        className={`num w-[7ch] rounded border border-transparent bg-transparent px-1 hover:border-hairline focus:border-rule focus:bg-sheet ${words ? '!border-oxide' : ''} ${className}`}
        autoComplete="off"
        spellCheck={false}
        aria-invalid={words ? true : undefined}
        aria-describedby={words ? id : undefined}
        value={typed ?? formatHex(value)}
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
      {words && (
        <span id={id} role="alert" className="field-error block max-w-48 whitespace-normal">
          {words}
        </span>
      )}
    </>
  )
}
