import { groupHash } from '../../lib/format.ts'

export interface HashProps {
  hash: string
  /** First so many bytes only; the whole is on hover. */
  bytes?: number
  className?: string
}

/** A content hash, grouped by four. Copying takes it whole and ungrouped. */
export function Hash({ hash, bytes, className = '' }: HashProps) {
  return (
    <span
      className={`num text-13 text-ink-2 ${className}`}
      title={hash}
      onCopy={(event) => {
        event.preventDefault()
        event.clipboardData.setData('text/plain', hash)
      }}
    >
      {groupHash(hash, bytes)}
    </span>
  )
}
