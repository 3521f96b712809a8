import type { BodeMargins, BodeSeries } from '../../components/charts/bode-chart.tsx'
import type { PlotSeries } from '../../components/charts/plot-data.ts'
import type { SeriesRole } from '../../components/charts/series-style.ts'
import type { Finding, JointReportView, JointSide, LoopName, StepTraces, ToleranceBound } from '../../../shared/contract/checks.ts'

/** The two sides of a joint that are drawn: an untouched joint is its own release. */
export const sidesOf = (report: JointReportView, base: string | null): { side: JointSide; role: SeriesRole; label: string }[] => [
  ...(report.released && report.touched ? [{ side: report.released, role: 'released' as const, label: base ? `released ${base}` : 'released' }] : []),
  ...(report.candidate ? [{ side: report.candidate, role: 'candidate' as const, label: 'candidate' }] : []),
]

export const bodeSeries = (sides: ReturnType<typeof sidesOf>, loop: LoopName): BodeSeries[] =>
  sides.flatMap(({ side, role, label }) => {
    const curve = side.curves[loop]
    return curve ? [{ label, role, frequency: curve.hz, magnitudeDb: curve.openDb, phaseDeg: curve.openPhaseDeg }] : []
  })

const at = (x: readonly number[], y: readonly number[], wanted: number): number | null => {
  const k = x.findIndex((v) => v >= wanted)
  if (k < 0) return null
  if (k === 0) return y[0]
  return y[k - 1] + ((y[k] - y[k - 1]) * Math.log(wanted / x[k - 1])) / Math.log(x[k] / x[k - 1])
}

/** Where the candidate's margins are drawn. The phase is the curve's own turn of it: −180° plus the margin, whole turns added. */
export function bodeMargins(side: JointSide, loop: LoopName): BodeMargins {
  const figures = side.figures.loops[loop]
  const curve = side.curves[loop]
  if (!figures || !curve) return {}
  const margins: BodeMargins = {}
  if (figures.gainMarginDb !== null && figures.gainMarginHz !== null) margins.gain = { frequency: figures.gainMarginHz, marginDb: figures.gainMarginDb }
  const phase = figures.phaseMarginHz === null ? null : at(curve.hz, curve.openPhaseDeg, figures.phaseMarginHz)
  if (phase !== null && figures.phaseMarginDeg !== null && figures.phaseMarginHz !== null) {
    const own = figures.phaseMarginDeg - 180
    margins.phase = { frequency: figures.phaseMarginHz, marginDeg: figures.phaseMarginDeg, phaseDeg: own + 360 * Math.round((phase - own) / 360) }
  }
  return margins
}

export const signals = [
  { name: 'theta', label: 'θ', unit: 'rad', response: 'position' },
  { name: 'omega', label: 'ω', unit: 'rad/s', response: 'velocity' },
  { name: 'i', label: 'i', unit: 'A', response: 'current' },
  { name: 'u', label: 'u', unit: 'V', response: null },
] as const
export type Signal = (typeof signals)[number]

const ms = (t: readonly number[]) => t.map((s) => s * 1e3)

/** One signal of the step over ms: set-point where it is the one commanded, released, candidate, and the worst corner. */
export function stepSeries(sides: ReturnType<typeof sidesOf>, signal: Signal): PlotSeries[] {
  const of = (traces: StepTraces, label: string, role: SeriesRole): PlotSeries => ({ label, role, x: ms(traces.t), y: traces[signal.name] })
  const series = sides.flatMap(({ side, role, label }) => (side.step ? [of(side.step, label, role)] : []))
  const candidate = sides.at(-1)?.side
  if (!candidate) return series
  if (candidate.stepAtWorst) series.push(of(candidate.stepAtWorst, 'worst corner', 'worst vertex'))
  const commanded = candidate.step ?? candidate.stepAtWorst
  if (commanded && candidate.figures.step?.response === signal.response) series.push({ label: 'set-point', role: 'set-point', x: ms(commanded.t), y: commanded.reference, stepped: true })
  return series
}

/** End of the time axis, ms: past the slower settling, so that the rise is not a line at the edge; the rest is a drag away. */
export function shownMs(sides: ReturnType<typeof sidesOf>): number {
  const steps = sides.flatMap(({ side }) => side.figures.step ?? [])
  const window = Math.min(...steps.map((s) => s.windowS))
  const settled = steps.map((s) => s.settlingTimeS ?? Infinity)
  return 1e3 * Math.min(window, 2.5 * Math.max(...settled))
}

export const clampsOf = (side: JointSide, signal: Signal): number[] => {
  const most = signal.name === 'omega' ? side.clamps.speed : signal.name === 'i' ? side.clamps.current : signal.name === 'u' ? side.clamps.voltage : null
  return most === null ? [] : [-most, most]
}

/** A corner's value as one reads it: temperature and supply as they are, the rest in percent of nominal. */
export function cornerText({ name, nominal, unit }: Pick<ToleranceBound, 'name' | 'nominal' | 'unit'>, value: number): string {
  if (unit === 'V') return value.toFixed(1)
  if (unit === '°C') return String(Math.round(value)).replace('-', '−')
  if (name === 'eta' || nominal === 0) return value.toFixed(2)
  const percent = Math.round((value / nominal - 1) * 100)
  return percent === 0 ? '0' : `${percent > 0 ? '+' : '−'}${Math.abs(percent)}`
}

export const cornerUnit = ({ name, nominal, unit }: Pick<ToleranceBound, 'name' | 'nominal' | 'unit'>): string => (unit === 'V' || unit === '°C' ? unit : name === 'eta' || nominal === 0 ? unit : '%')

/** Policy's limit of a kind of finding for this joint; with several loops of one limit each, the strictest for "at least". */
export function limitOf(findings: readonly Finding[], kind: string, loop?: LoopName): number | null {
  const limits = findings.flatMap((f) => (f.kind === kind && (loop === undefined || f.loop === loop) && f.limit !== null ? [f.limit] : []))
  return limits.length === 0 ? null : Math.max(...limits)
}
