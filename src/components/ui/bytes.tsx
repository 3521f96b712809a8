export interface BytesProps {
  bytes: readonly number[] | Uint8Array
  /** What stood there before; bytes that differ are brass and underlined. */
  before?: readonly number[] | Uint8Array
  className?: string
}

/** Register bytes in hex. */
export function Bytes({ bytes, before, className = '' }: BytesProps) {
  const list = Array.from(bytes)
  const changed = before === undefined ? [] : list.map((b, i) => b !== before[i])
  const n = changed.filter(Boolean).length
  return (
    <span className={`bytes num text-13 ${className}`}>
      {list.map((b, i) => {
        const hex = b.toString(16).toUpperCase().padStart(2, '0')
        return (
          <span key={i}>
            {i > 0 && ' '}
            {changed[i] ? <b>{hex}</b> : hex}
          </span>
        )
      })}
      {before !== undefined && <span className="sr-only">, {n === 0 ? 'unchanged' : `${n} of ${list.length} bytes changed`}</span>}
    </span>
  )
}
