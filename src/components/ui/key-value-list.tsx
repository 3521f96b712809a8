import type { ReactNode } from 'react'

export interface KeyValue {
  key: string
  value: ReactNode
}

/** Names and values in two columns. */
export function KeyValueList({ entries, className = '', align = 'start' }: { entries: readonly KeyValue[]; className?: string; align?: 'start' | 'end' }) {
  return (
    <dl className={`grid grid-cols-[auto_minmax(0,1fr)] gap-x-[14px] gap-y-[2px] text-13 ${className}`}>
      {entries.map((e) => (
        <div key={e.key} className="contents">
          <dt className="text-ink-2">{e.key}</dt>
          <dd className={align === 'end' ? 'text-right' : ''}>{e.value}</dd>
        </div>
      ))}
    </dl>
  )
}
