import { useRef } from 'react'
import type { ReactNode } from 'react'
import { formatNumber } from '../../lib/format.ts'
import { useWidth } from '../ui/use-width.ts'
import { ChartFrame } from './chart-frame.tsx'
import { Legend } from './legend.tsx'
import { SERIES_STYLES } from './series-style.ts'
import type { SeriesRole } from './series-style.ts'
import { saveSvg } from './svg-image.ts'

export interface PoleSet {
  label: string
  role: SeriesRole
  poles: readonly { re: number; im: number }[]
}

export interface PolePlotProps {
  title?: string
  level?: 2 | 3
  aux?: ReactNode
  sets: readonly PoleSet[]
  hideLegend?: boolean
  className?: string
  /** Beside or below: "frequencies are known only modulo 2.000 kHz". */
  note?: ReactNode
}

/** Eigenvalues over one hyperperiod in the upper half of the unit circle; lines of equal damping faint. The ones outside are drawn at their place, or at the edge with an arrow when further than 1.25. */
export function PolePlot({ title = 'Poles in the unit circle', level, aux, sets, hideLegend = false, className, note }: PolePlotProps) {
  const [frame, width] = useWidth<HTMLDivElement>(206)
  const svg = useRef<SVGSVGElement>(null)
  const shown = sets.map((s) => ({ ...s, poles: s.poles.filter((p) => p.im >= -1e-12) }))
  const outside = Math.max(1, ...shown.flatMap((s) => s.poles.map((p) => Math.hypot(p.re, p.im))))
  const reach = outside > 1 ? Math.min(1.25, outside) + 0.04 : 1
  const size = Math.min(width, 420)
  const r = (size / 2 - 14) / reach
  const cx = size / 2
  const cy = r * reach + 11
  const height = cy + 18
  const at = (re: number, im: number) => `${(cx + re * r).toFixed(1)} ${(cy - im * r).toFixed(1)}`
  return (
    <ChartFrame
      title={title}
      level={level}
      aux={aux}
      className={className}
      legend={hideLegend ? undefined : <Legend entries={sets.map((s) => ({ label: s.label, role: s.role }))} />}
      numbers={() => ({
        head: ['set', 'real', 'imaginary', 'modulus'],
        rows: sets.flatMap((s) => s.poles.toSorted((a, b) => Math.hypot(b.re, b.im) - Math.hypot(a.re, a.im)).map((p) => [s.label, p.re, p.im, Math.hypot(p.re, p.im)])),
      })}
      onImage={(name) => svg.current && saveSvg(name, svg.current)}
    >
      <div ref={frame} className="mt-1">
        <svg ref={svg} width={size} height={height} viewBox={`0 0 ${size} ${height}`} role="img" aria-label={summary(sets)}>
          <path d={`M${at(-1, 0)}A${r} ${r} 0 0 1 ${at(1, 0)}`} fill="var(--verdigris-wash)" stroke="var(--ink)" strokeWidth="1.2" />
          <path d={`M6 ${cy}H${size - 6}M${cx} ${cy}V${cy - r * Math.max(1, reach) - 6}`} stroke="var(--rule)" strokeWidth=".8" fill="none" />
          {[0.1, 0.3, 0.5, 0.7].map((zeta) => (
            <path key={zeta} d={dampingLine(zeta, at)} fill="none" stroke="var(--hairline)" strokeWidth=".8" />
          ))}
          {shown.map((s) => {
            const style = SERIES_STYLES[s.role]
            const k = s.role === 'candidate' ? 4 : 3.4
            return s.poles.map((p, i) => {
              const m = Math.hypot(p.re, p.im)
              const held = m > reach ? (reach - 0.02) / m : 1
              const [x, y] = at(p.re * held, p.im * held).split(' ').map(Number)
              return <path key={`${s.label} ${i}`} d={`M${x - k} ${y - k}l${2 * k} ${2 * k}M${x - k} ${y + k}l${2 * k} ${-2 * k}`} fill="none" stroke={m > 1 ? 'var(--oxide)' : `var(--${style.colour})`} strokeWidth={s.role === 'candidate' ? 1.9 : 1.3} />
            })
          })}
          {[-1, 0, 1].map((v) => (
            <text key={v} className="num" x={cx + v * r} y={cy + 15} textAnchor="middle">{v < 0 ? '\u22121' : v}</text>
          ))}
        </svg>
        {note && <p className="text-12 text-ink-2">{note}</p>}
      </div>
    </ChartFrame>
  )
}

export default PolePlot

/** z = exp(−ζω + jω√(1−ζ²)) from ω = 0 until the angle is π. */
function dampingLine(zeta: number, at: (re: number, im: number) => string): string {
  const root = Math.sqrt(1 - zeta * zeta)
  const points = Array.from({ length: 49 }, (_, i) => {
    const angle = (Math.PI * i) / 48
    const modulus = Math.exp((-zeta / root) * angle)
    return at(modulus * Math.cos(angle), modulus * Math.sin(angle))
  })
  return `M${points.join('L')}`
}

function summary(sets: readonly PoleSet[]): string {
  return sets
    .map((s) => {
      const moduli = s.poles.map((p) => Math.hypot(p.re, p.im))
      const out = moduli.filter((m) => m > 1).length
      return `${s.label}: ${s.poles.length} poles, largest modulus ${formatNumber(Math.max(0, ...moduli), { digits: 5 })}${out > 0 ? `, ${out} outside the unit circle` : ''}`
    })
    .join('. ')
}
