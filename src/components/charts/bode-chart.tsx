import { useId, useMemo, useRef } from 'react'
import type { ReactNode } from 'react'
import type uPlot from 'uplot'
import { formatDb, formatDegrees } from '../../lib/format.ts'
import { ChartFrame } from './chart-frame.tsx'
import { Legend } from './legend.tsx'
import { axisName, LinePlot } from './line-plot.tsx'
import { alignSeries } from './plot-data.ts'
import { savePlots } from './plot-image.ts'
import type { PlotAxis, PlotMark } from './plot-options.ts'
import type { SeriesRole } from './series-style.ts'

export interface BodeSeries {
  label: string
  role: SeriesRole
  /** Hz, ascending */
  frequency: readonly number[]
  magnitudeDb: readonly (number | null)[]
  phaseDeg: readonly (number | null)[]
}

export interface BodeMargins {
  /** Hz where |L| is 1, and the margin there. */
  phase?: { frequency: number; marginDeg: number; phaseDeg: number }
  /** Hz where the phase is −180° (or another odd multiple), and the margin there. */
  gain?: { frequency: number; marginDb: number }
}

export interface BodeChartProps {
  title: string
  level?: 2 | 3
  aux?: ReactNode
  /** Keep the array between renders. */
  series: readonly BodeSeries[]
  /** Margins of the candidate, drawn in verdigris. */
  margins?: BodeMargins
  /** dB; by default what holds the curves, at most −60 … 60. */
  magnitudeRange?: [number, number]
  hideLegend?: boolean
  className?: string
}

const FREQUENCY: PlotAxis = { label: 'frequency', unit: 'Hz', log: true }

/** Magnitude over phase of a loop, with the margins where they are read. */
export function BodeChart({ title, level, aux, series, margins, magnitudeRange, hideLegend = false, className }: BodeChartProps) {
  const together = useId()
  const upper = useRef<uPlot | null>(null)
  const lower = useRef<uPlot | null>(null)
  const plots = useMemo(() => prepare(series, magnitudeRange), [series, magnitudeRange])
  const entries = series.map((s) => ({ label: s.label, role: s.role }))
  const { phase, gain } = margins ?? {}
  const above: PlotMark[] = []
  const below: PlotMark[] = []
  if (gain) above.push({ kind: 'margin', x: gain.frequency, from: 0, to: -gain.marginDb, label: `${formatDb(gain.marginDb)} dB` })
  if (phase) {
    above.push({ kind: 'crossover', x: phase.frequency, from: 0, to: plots.magnitude.axis.min ?? -60 })
    below.push({ kind: 'crossover', x: phase.frequency, from: plots.phase.axis.max ?? 0, to: phase.phaseDeg })
    below.push({ kind: 'margin', x: phase.frequency, from: phase.phaseDeg - phase.marginDeg, to: phase.phaseDeg, label: `${formatDegrees(phase.marginDeg)}°` })
  }
  return (
    <ChartFrame
      title={title}
      level={level}
      aux={aux}
      className={className}
      legend={hideLegend ? undefined : <Legend entries={entries} />}
      numbers={() => {
        const m = alignSeries(plots.magnitude.series)
        const p = alignSeries(plots.phase.series)
        return {
          head: ['frequency, Hz', ...series.flatMap((s) => [`${s.label} |L|, dB`, `${s.label} phase, °`])],
          rows: m.x.map((f, i) => [f, ...series.flatMap((_, j) => [m.ys[j][i], p.ys[j][i]])]),
        }
      }}
      onImage={(name) => {
        if (upper.current && lower.current) {
          savePlots(name, title, entries, [
            { plot: upper.current, y: axisName(plots.magnitude.axis) },
            { plot: lower.current, y: axisName(plots.phase.axis), x: axisName(FREQUENCY) },
          ])
        }
      }}
    >
      <LinePlot label={`${title}, magnitude`} x={plots.frequency} y={plots.magnitude.axis} series={plots.magnitude.series} limits={[{ value: 0, kind: 'axis' }]} marks={above} height={200} together={together} upper plotRef={upper} />
      <LinePlot label={`${title}, phase`} x={plots.frequency} y={plots.phase.axis} series={plots.phase.series} limits={[{ value: -180, kind: 'axis' }]} marks={below} height={180} together={together} plotRef={lower} />
    </ChartFrame>
  )
}

export default BodeChart

function prepare(series: readonly BodeSeries[], wanted?: [number, number]) {
  const levels = series.flatMap((s) => s.magnitudeDb).filter((v): v is number => v !== null && Number.isFinite(v))
  const angles = series.flatMap((s) => s.phaseDeg).filter((v): v is number => v !== null && Number.isFinite(v))
  const frequencies = series.flatMap((s) => [s.frequency[0], s.frequency[s.frequency.length - 1]]).filter((f) => f > 0)
  const [low, high] = wanted ?? [Math.max(-60, Math.floor(Math.min(0, ...levels) / 20) * 20), Math.min(60, Math.ceil(Math.max(0, ...levels) / 20) * 20)]
  return {
    frequency: { ...FREQUENCY, min: Math.min(...frequencies), max: Math.max(...frequencies) },
    magnitude: {
      axis: { label: '|L|', unit: 'dB', min: low, max: high, every: 20 } satisfies PlotAxis as PlotAxis,
      series: series.map((s) => ({ label: s.label, role: s.role, x: s.frequency, y: s.magnitudeDb })),
    },
    phase: {
      axis: { label: 'phase of L', unit: '°', min: Math.max(-540, Math.floor(Math.min(-180, ...angles) / 90) * 90), max: Math.ceil(Math.max(0, ...angles) / 90) * 90, every: 90 } satisfies PlotAxis as PlotAxis,
      series: series.map((s) => ({ label: s.label, role: s.role, x: s.frequency, y: s.phaseDeg })),
    },
  }
}
