import { useRef } from 'react'
import type { ReactNode } from 'react'
import type uPlot from 'uplot'
import { ChartFrame } from './chart-frame.tsx'
import { Legend } from './legend.tsx'
import { axisName, LinePlot } from './line-plot.tsx'
import { alignSeries } from './plot-data.ts'
import type { PlotSeries } from './plot-data.ts'
import { savePlots } from './plot-image.ts'
import type { PlotAxis, PlotLimit } from './plot-options.ts'

export interface SeriesChartProps {
  title: string
  level?: 2 | 3
  aux?: ReactNode
  x: PlotAxis
  y: PlotAxis
  /** Keep the array between renders (useMemo): a new one draws the plot anew. */
  series: readonly PlotSeries[]
  limits?: readonly PlotLimit[]
  height?: number
  digits?: number
  /** Charts of one key share the cursor. */
  together?: string
  hideLegend?: boolean
  className?: string
}

/** Series over time or any other axis, with cursor readout, limits, table, image and CSV. */
export function SeriesChart({ title, level, aux, x, y, series, limits, height = 180, digits, together, hideLegend = false, className }: SeriesChartProps) {
  const plot = useRef<uPlot | null>(null)
  const entries = series.map((s) => ({ label: s.label, role: s.role }))
  return (
    <ChartFrame
      title={title}
      level={level}
      aux={aux}
      className={className}
      legend={hideLegend ? undefined : <Legend entries={entries} />}
      numbers={() => {
        const aligned = alignSeries(series)
        return { head: [axisName(x), ...series.map((s) => `${s.label}, ${y.unit}`)], rows: aligned.x.map((v, i) => [v, ...aligned.ys.map((column) => column[i])]) }
      }}
      onImage={(name) => plot.current && savePlots(name, title, entries, [{ plot: plot.current, y: axisName(y), x: axisName(x) }])}
    >
      <LinePlot label={title} x={x} y={y} series={series} limits={limits} height={height} digits={digits} together={together} plotRef={plot} />
    </ChartFrame>
  )
}

export default SeriesChart
