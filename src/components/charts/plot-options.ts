import type uPlot from 'uplot'
import { formatFixed, formatNumber } from '../../lib/format.ts'
import type { PlotSeries } from './plot-data.ts'
import { SERIES_STYLES } from './series-style.ts'
import { token } from './tokens.ts'

export interface PlotAxis {
  label: string
  unit: string
  log?: boolean
  min?: number
  max?: number
  /** Distance of the ticks, where round numbers of the decimal kind are not the natural ones: 90 for degrees. */
  every?: number
}

/** A level that holds for all x. */
export interface PlotLimit {
  value: number
  label?: string
  /** Clamps and policy are dotted plum; an axis is a plain line, as 0 dB. */
  kind: 'clamp' | 'policy' | 'axis'
}

/** A margin: a span at one x between two levels, with its figure; or a drop line. */
export interface PlotMark {
  x: number
  from: number
  to: number
  label?: string
  kind: 'margin' | 'crossover'
}

export interface PlotOptionsInput {
  UPlot: typeof uPlot
  width: number
  height: number
  x: PlotAxis
  y: PlotAxis
  series: readonly PlotSeries[]
  limits: readonly PlotLimit[]
  marks: readonly PlotMark[]
  together?: string
  upper: boolean
  onCursor: (at: { x: number; left: number } | null) => void
}

const FONT = '12px "Fira Mono", monospace'
/** Room for the figures left of the axis; the same on every plot, so that plots under one another align. */
export const Y_AXIS_WIDTH = 44

export function plotOptions({ UPlot, width, height, x, y, series, limits, marks, together, upper, onCursor }: PlotOptionsInput): uPlot.Options {
  const quiet = token('ink-2')
  const axis = { stroke: quiet, font: FONT, labelSize: 0, grid: { stroke: token('grid'), width: 1 }, ticks: { stroke: quiet, width: 1, size: 4 }, border: { show: true, stroke: quiet, width: 1 } }
  const range = (a: PlotAxis): uPlot.Scale.Range | undefined => (a.min !== undefined && a.max !== undefined ? [a.min, a.max] : undefined)
  return {
    width,
    height,
    padding: [8, 10, upper ? 6 : 0, 0],
    legend: { show: false },
    cursor: {
      y: false,
      drag: { x: true, y: false },
      points: { size: 6, width: 1, fill: (_u, i) => colour(series[i - 1]), stroke: () => token('paper') },
      ...(together ? { sync: { key: together, scales: ['x', null] as [string, null] } } : {}),
    },
    scales: {
      x: { time: false, distr: x.log ? 3 : 1, range: range(x) ?? (x.log ? undefined : (_u, min, max) => [min, max]) },
      y: { range: range(y) ?? ((_u, min, max) => UPlot.rangeNum(Math.min(min, ...limits.map((l) => l.value)), Math.max(max, ...limits.map((l) => l.value)), 0.08, true)) },
    },
    axes: [
      {
        ...axis,
        size: upper ? 8 : 24,
        gap: 2,
        space: x.log ? 30 : 60,
        values: (_u, splits) => (upper ? splits.map(() => '') : splits.map((v) => (x.log ? decadeText(v) : tickText(v, splits)))),
        ...(x.log ? { grid: { ...axis.grid, width: 0.7 } } : {}),
      },
      {
        ...axis,
        size: Y_AXIS_WIDTH,
        gap: 3,
        space: 28,
        values: (_u, splits) => splits.map((v) => tickText(v, splits)),
        ...(y.every !== undefined ? { splits: (_u, _i, min, max) => stepsOf(y.every as number, min, max) } : {}),
      },
    ],
    series: [{}, ...series.map((s) => seriesOptions(UPlot, s))],
    hooks: {
      setCursor: [
        (u) => {
          const { idx, left } = u.cursor
          onCursor(idx === null || idx === undefined || left === undefined || left < 0 ? null : { x: u.data[0][idx], left: u.valToPos(u.data[0][idx], 'x') })
        },
      ],
      drawAxes: [(u) => drawLimits(u, limits)],
      draw: [(u) => drawMarks(u, marks)],
    },
  }
}

function colour(s: PlotSeries | undefined): string {
  return token(s ? SERIES_STYLES[s.role].colour : 'ink')
}

function seriesOptions(UPlot: typeof uPlot, s: PlotSeries): uPlot.Series {
  const style = SERIES_STYLES[s.role]
  if (style.points) return { label: s.label, stroke: colour(s), paths: () => null, points: { show: true, size: 3.4, width: 0, fill: colour(s) } }
  return {
    label: s.label,
    stroke: colour(s),
    width: style.width,
    dash: style.dash,
    points: { show: false },
    ...(s.stepped && UPlot.paths.stepped ? { paths: UPlot.paths.stepped({ align: 1 }) } : {}),
  }
}

/** As many decimals as the distance of the ticks needs. */
function tickText(value: number, splits: number[]): string {
  const step = splits.length > 1 ? Math.abs(splits[1] - splits[0]) : 1
  if (step >= 1e5 || step < 1e-5) return formatNumber(value, { digits: 2 })
  return formatFixed(value, Math.max(0, -Math.floor(Math.log10(step) + 1e-9)))
}

/** Powers of ten only, thousands as k. */
function decadeText(value: number | null): string {
  if (value === null) return ''
  const power = Math.log10(value)
  if (Math.abs(power - Math.round(power)) > 1e-9) return ''
  return value >= 1000 ? `${value / 1000}k` : String(Number(value.toPrecision(1)))
}

function stepsOf(every: number, min: number, max: number): number[] {
  const list: number[] = []
  for (let v = Math.ceil(min / every - 1e-9) * every; v <= max + 1e-9; v += every) list.push(v)
  return list
}

function drawLimits(u: uPlot, limits: readonly PlotLimit[]): void {
  const { ctx, bbox } = u
  const px = devicePixelRatio
  for (const limit of limits) {
    const y = Math.round(u.valToPos(limit.value, 'y', true)) + 0.5
    if (y < bbox.top || y > bbox.top + bbox.height) continue
    ctx.save()
    ctx.lineWidth = px * (limit.kind === 'axis' ? 1 : 1.5)
    ctx.strokeStyle = token(limit.kind === 'axis' ? 'ink-2' : 'plum')
    ctx.setLineDash(limit.kind === 'axis' ? [] : [px, 3 * px])
    ctx.beginPath()
    ctx.moveTo(bbox.left, y)
    ctx.lineTo(bbox.left + bbox.width, y)
    ctx.stroke()
    if (limit.label) {
      ctx.font = `${12 * px}px "Fira Sans", sans-serif`
      ctx.fillStyle = token('plum')
      ctx.textAlign = 'right'
      const at = [bbox.left + bbox.width - 2 * px, y - 5 * px < bbox.top + 10 * px ? y + 14 * px : y - 5 * px] as const
      ctx.setLineDash([])
      ctx.lineJoin = 'round'
      ctx.lineWidth = 4 * px
      ctx.strokeStyle = token('paper')
      ctx.strokeText(limit.label, ...at)
      ctx.fillText(limit.label, ...at)
    }
    ctx.restore()
  }
}

function drawMarks(u: uPlot, marks: readonly PlotMark[]): void {
  const { ctx, bbox } = u
  const px = devicePixelRatio
  for (const mark of marks) {
    const x = u.valToPos(mark.x, 'x', true)
    const held = (v: number) => Math.min(bbox.top + bbox.height, Math.max(bbox.top, u.valToPos(v, 'y', true)))
    if (x < bbox.left || x > bbox.left + bbox.width) continue
    const [a, b] = [held(mark.from), held(mark.to)]
    ctx.save()
    ctx.beginPath()
    ctx.strokeStyle = token(mark.kind === 'margin' ? 'verdigris' : 'rule')
    ctx.setLineDash(mark.kind === 'margin' ? [] : [2 * px, 3 * px])
    ctx.lineWidth = px * (mark.kind === 'margin' ? 2 : 1)
    ctx.moveTo(x, a)
    ctx.lineTo(x, b)
    if (mark.kind === 'margin') {
      ctx.moveTo(x - 5 * px, a)
      ctx.lineTo(x + 5 * px, a)
      ctx.moveTo(x - 5 * px, b)
      ctx.lineTo(x + 5 * px, b)
    }
    ctx.stroke()
    if (mark.label) {
      const left = x > bbox.left + bbox.width - 70 * px
      ctx.font = `${12 * px}px "Fira Mono", monospace`
      ctx.textAlign = left ? 'right' : 'left'
      const at = [x + (left ? -9 : 9) * px, (a + b) / 2 + 4 * px] as const
      ctx.lineJoin = 'round'
      ctx.setLineDash([])
      ctx.lineWidth = 4 * px
      ctx.strokeStyle = token('paper')
      ctx.strokeText(mark.label, ...at)
      ctx.fillStyle = token('verdigris')
      ctx.fillText(mark.label, ...at)
    }
    ctx.restore()
  }
}
