import { Hatch } from './hatch.tsx'
import { rulerTicks } from './ruler-scale.ts'
import type { RulerScale } from './ruler-scale.ts'

export interface RulerDrawingProps {
  scale: RulerScale
  /** The ball; null for none. */
  value: number | null
  released: number | null
  /** Stretches in which the joint is unstable with the other values as they stand. */
  unstable?: readonly { from: number; to: number }[]
  /** the stretches are of older values */
  fading?: boolean
  /** Policy's stop, and the side it forbids. */
  policy?: { limit: number; forbidden: 'below' | 'above' }
  /** Values of their own held by joints of the family. */
  flags?: readonly number[]
  width: number
  figures: boolean
  format: (value: number) => string
}

const PAD = 6
const Y = 9

/** The drawing alone: line with notch, ticks, hatches, ball and figures. */
export function RulerDrawing({ scale, value, released, unstable = [], fading = false, policy, flags = [], width, figures, format }: RulerDrawingProps) {
  const x = (v: number) => PAD + scale.share(v) * (width - 2 * PAD)
  const notch = released === null ? null : x(released)
  const seated = value !== null && released !== null && value === released
  const stop = policy && x(policy.limit)
  return (
    <svg width={width} height={figures ? 30 : 16} viewBox={`0 0 ${width} ${figures ? 30 : 16}`} aria-hidden="true">
      {unstable.map((u) => (
        <g key={`${u.from} ${u.to}`} opacity={fading ? 0.4 : undefined}>
          <Hatch x1={x(u.from)} x2={x(u.to)} y={Y} depth={5} colour="var(--oxide)" />
          {[u.from, u.to].map((edge) => edge > scale.min && edge < scale.max && <path key={edge} d={`M${x(edge)} 6v8`} stroke="var(--oxide)" strokeWidth="1.3" />)}
        </g>
      ))}
      {policy && stop !== undefined && (
        <>
          <Hatch x1={policy.forbidden === 'below' ? PAD : stop} x2={policy.forbidden === 'below' ? stop : width - PAD} y={Y} depth={4} colour="var(--plum)" />
          <path d={`M${stop} 3V15`} stroke="var(--plum)" strokeWidth="1.5" />
        </>
      )}
      {rulerTicks(scale).map((t) => (
        <path key={t.value} d={`M${x(t.value)} ${Y}v${t.major ? -4 : -2.6}`} stroke="var(--ink-2)" strokeWidth="1" />
      ))}
      <path
        d={notch === null ? `M${PAD} ${Y}H${width - PAD}` : `M${PAD} ${Y}L${notch - 4.6} ${Y}L${notch} 14.4L${notch + 4.6} ${Y}L${width - PAD} ${Y}`}
        fill={unstable.length > 0 || policy ? 'var(--sheet)' : 'none'}
        stroke="var(--ink)"
        strokeWidth="1.2"
      />
      {flags.map((f, i) => (
        <path key={i} d={`M${x(f) - 3} 1h6l-3 5z`} fill="var(--ink-2)" />
      ))}
      {value !== null && <circle cx={x(value)} cy={seated ? 7.7 : 4.7} r="4.1" fill={seated ? 'var(--ink)' : 'var(--brass)'} />}
      {figures && <Figures scale={scale} width={width} notch={seated ? null : notch} released={released} format={format} />}
    </svg>
  )
}

/** Bounds at the ends; the released value under its notch, unless a bound stands there. */
function Figures({ scale, width, notch, released, format }: { scale: RulerScale; width: number; notch: number | null; released: number | null; format: (v: number) => string }) {
  const low = bound(scale.min)
  const high = bound(scale.max)
  const middle = released === null ? '' : format(released)
  const half = (middle.length * 7.2) / 2
  // Fira Mono at 12 px is 7.2 px a figure. A bound gives way to the released value.
  const keepLow = notch === null || notch - half > PAD + low.length * 7.2 + 6
  const keepHigh = notch === null || notch + half < width - PAD - high.length * 7.2 - 6
  const at = notch === null ? 0 : Math.min(width - PAD - half, Math.max(PAD + half, notch))
  return (
    <>
      {keepLow && <text x={PAD} y="28" className="num grouped">{low}</text>}
      {keepHigh && <text x={width - PAD} y="28" textAnchor="end" className="num grouped">{high}</text>}
      {notch !== null && <text x={at} y="28" textAnchor="middle" className="num grouped ink">{middle}</text>}
    </>
  )
}

/** Bounds without digits they do not need. */
function bound(value: number): string {
  const text = String(Number(Math.abs(value).toPrecision(4)))
  const grouped = /^\d{4,}$/.test(text) ? text.replaceAll(/\B(?=(\d{3})+$)/g, '\u00a0') : text
  return (value < 0 ? '\u2212' : '') + grouped
}
