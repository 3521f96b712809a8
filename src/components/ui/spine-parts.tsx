import { formatQuantity } from '../../lib/format.ts'

/** x of the two hairlines in the 214 px wide spine. */
export const SDA = 52
export const SCL = 140
export const MIDDLE = 96

/** Supply, pull-up resistors and the names of the two lines. */
export function SpineHead({ supply, pullUp }: { supply: number; pullUp: number }) {
  const v = formatQuantity(supply, 'V', { digits: 2 })
  const r = formatQuantity(pullUp, 'Ω', { digits: 2 })
  return (
    <svg width="214" height="75" viewBox="0 0 214 75" role="img" aria-label={`pull-up ${r.number} ${r.unit} to ${v.number} ${v.unit}`}>
      <path d="M38 26H154" stroke="var(--ink)" strokeWidth="1.2" />
      <text className="num" x={MIDDLE} y="19" textAnchor="middle">{`${v.number} ${v.unit}`}</text>
      {[SDA, SCL].map((x) => (
        <g key={x}>
          <path d={`M${x} 26v8M${x} 54v21`} stroke="var(--ink)" strokeWidth="1.2" />
          <rect x={x - 4} y="34" width="8" height="20" fill="var(--paper)" stroke="var(--ink)" strokeWidth="1.2" />
        </g>
      ))}
      <text className="num" x={MIDDLE} y="48" textAnchor="middle">{`${r.number} ${r.unit}`}</text>
      <text x="44" y="64" textAnchor="end" className="ink">SDA</text>
      <text x="148" y="64" className="ink">SCL</text>
    </svg>
  )
}

/** A stretch of addresses without boards. */
export function FreeRun({ count }: { count: number }) {
  return (
    <svg width="214" height="22" viewBox="0 0 214 22" role="img" aria-label={`${count} addresses free`}>
      {[SDA, SCL].map((x) => (
        <g key={x}>
          <path d={`M${x} 0v3M${x} 19v3`} stroke="var(--ink)" strokeWidth="1.3" />
          <path d={`M${x} 3v16`} stroke="var(--rule)" strokeWidth="1" strokeDasharray="1.5 4" />
        </g>
      ))}
      <text x={MIDDLE} y="15" textAnchor="middle">{count} free</text>
    </svg>
  )
}
