import { Hatch } from '../ui/hatch.tsx'

const WORDS = ['under 20°', '20', '30', '45', '60 and more']

/** The classes of the stability map. */
export function MapLegend() {
  return (
    <ul className="flex flex-wrap gap-x-[10px] gap-y-1 text-12 text-ink-2">
      <li className="flex items-center gap-[5px]">
        <svg width="16" height="12" viewBox="0 0 16 12" aria-hidden="true">
          <rect width="16" height="12" fill="var(--oxide-wash)" />
          <Hatch x1={0} x2={16} y={0} depth={12} colour="var(--oxide)" />
        </svg>
        unstable
      </li>
      {WORDS.map((word, i) => (
        <li key={word} className="flex items-center gap-[5px]">
          <svg width="16" height="12" aria-hidden="true">
            <rect width="16" height="12" fill={`var(--map-${i + 1})`} />
          </svg>
          {word}
        </li>
      ))}
      <li className="flex items-center gap-[5px]">
        <svg width="16" height="12" viewBox="0 0 16 12" aria-hidden="true">
          <path d="M0 6h16" stroke="var(--ink)" strokeWidth="2" />
        </svg>
        policy
      </li>
    </ul>
  )
}
