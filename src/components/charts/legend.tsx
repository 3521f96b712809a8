import { SERIES_STYLES } from './series-style.ts'
import type { SeriesRole } from './series-style.ts'

export interface LegendEntry {
  label: string
  role: SeriesRole
}

export function Legend({ entries }: { entries: readonly LegendEntry[] }) {
  return (
    <ul className="flex flex-wrap gap-x-[14px] gap-y-1 text-12 text-ink-2">
      {entries.map((e) => {
        const style = SERIES_STYLES[e.role]
        return (
          <li key={e.label} className="flex items-center gap-[6px]">
            <svg width="22" height="10" viewBox="0 0 22 10" aria-hidden="true">
              {style.points ? (
                [3, 8.5, 14, 19.5].map((x) => <circle key={x} cx={x} cy="5" r="1.7" fill={`var(--${style.colour})`} />)
              ) : (
                <path d="M0 5h22" stroke={`var(--${style.colour})`} strokeWidth={style.width} strokeDasharray={style.dash?.join(' ')} />
              )}
            </svg>
            {e.label}
          </li>
        )
      })}
    </ul>
  )
}
