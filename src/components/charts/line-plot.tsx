import { useEffect, useRef, useState } from 'react'
import type { KeyboardEvent, RefObject } from 'react'
import type uPlot from 'uplot'
import { formatNumber } from '../../lib/format.ts'
import { useWidth } from '../ui/use-width.ts'
import { plotOptions } from './plot-options.ts'
import type { PlotAxis, PlotLimit, PlotMark } from './plot-options.ts'
import { alignSeries, valueAt } from './plot-data.ts'
import type { PlotSeries } from './plot-data.ts'
import { SERIES_STYLES } from './series-style.ts'
import { useThemeKey } from './use-theme-key.ts'

export interface LinePlotProps {
  /** Said of the whole: "step response". */
  label: string
  x: PlotAxis
  y: PlotAxis
  series: readonly PlotSeries[]
  limits?: readonly PlotLimit[]
  marks?: readonly PlotMark[]
  height: number
  /** Significant digits of the readout. */
  digits?: number
  /** Plots of one key share the cursor and the stretch of x shown. */
  together?: string
  /** Without figures and name below: another plot stands under it. */
  upper?: boolean
  /** Filled with the plot for the picture to be saved. */
  plotRef?: RefObject<uPlot | null>
}

/**
 * One set of axes on canvas. The pointer, or ← → (Shift: ten points, Home, End) with the focus on it, moves a cursor whose readout is
 * announced; a drag shows a stretch of x, a double press or Esc all of it.
 */
export function LinePlot({ label, x, y, series, limits = [], marks = [], height, digits = 4, together, upper = false, plotRef }: LinePlotProps) {
  const [frame, width] = useWidth<HTMLDivElement>(440)
  const canvasHost = useRef<HTMLDivElement>(null)
  const own = useRef<uPlot | null>(null)
  const [cursor, setCursor] = useState<{ x: number; left: number } | null>(null)
  const [failed, setFailed] = useState(false)
  const theme = useThemeKey()
  const around = JSON.stringify([x, y, limits, marks])

  useEffect(() => {
    const host = canvasHost.current
    if (!host) return
    let stopped = false
    const { x: xs, ys } = alignSeries(series)
    import('uplot')
      .then(({ default: UPlot }) => {
        if (stopped) return
        const options = plotOptions({ UPlot, width, height, x, y, series, limits, marks, together, upper, onCursor: setCursor })
        const plot = new UPlot(options, [xs, ...ys] as uPlot.AlignedData, host)
        own.current = plot
        if (plotRef) plotRef.current = plot
        // Canvas text needs the face loaded; the page may not have used it yet.
        void document.fonts?.load('12px "Fira Mono"').then(() => !stopped && plot.redraw(false, true))
      })
      .catch(() => setFailed(true))
    return () => {
      stopped = true
      own.current?.destroy()
      own.current = null
      if (plotRef) plotRef.current = null
    }
    // A plot is made anew for new data, size or colours. Axes, limits and marks are small and compared by content (`around`).
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, [series, width, height, theme, together, upper, around])

  const onKey = (event: KeyboardEvent) => {
    const plot = own.current
    if (!plot) return
    const xs = plot.data[0]
    const here = plot.cursor.idx ?? -1
    const large = event.shiftKey ? 10 : 1
    const next =
      event.key === 'ArrowRight' ? Math.min(here + large, xs.length - 1)
      : event.key === 'ArrowLeft' ? Math.max(here < 0 ? xs.length - 1 : here - large, 0)
      : event.key === 'Home' ? 0
      : event.key === 'End' ? xs.length - 1
      : null
    if (event.key === 'Escape' && xs.length > 0) plot.setScale('x', { min: xs[0], max: xs[xs.length - 1] })
    if (next === null || xs.length === 0) return
    event.preventDefault()
    plot.setCursor({ left: plot.valToPos(xs[next], 'x'), top: height / 2 })
  }

  const readings = cursor === null ? [] : series.map((s) => ({ label: s.label, role: s.role, value: valueAt(s, cursor.x) })).filter((r) => r.value !== null)
  const at = cursor && `${formatNumber(cursor.x, { digits })} ${x.unit}`
  const flip = cursor !== null && cursor.left > width * 0.6
  return (
    <div ref={frame} className="relative" role="group" tabIndex={0} aria-label={`${label}. Left and right arrows read values.`} onKeyDown={onKey}>
      <div className="flex justify-between text-12 text-ink-2">
        <span>{axisName(y)}</span>
      </div>
      <div ref={canvasHost} style={{ height }} />
      {!upper && <div className="-mt-1 text-right text-12 text-ink-2">{axisName(x)}</div>}
      {failed && <p className="absolute inset-x-12 top-10 text-13 text-ink-2">The picture could not be drawn. The table holds the same numbers.</p>}
      {cursor && (
        <div className="chart-readout" style={{ bottom: upper ? 20 : 52, left: flip ? undefined : cursor.left + 52, right: flip ? width - cursor.left - 36 : undefined }}>
          <div className="text-ink-2">{at}</div>
          {readings.map((r) => (
            <div key={r.label} style={{ color: `var(--${SERIES_STYLES[r.role].colour})` }}>
              {r.label} {formatNumber(r.value as number, { digits })}
            </div>
          ))}
        </div>
      )}
      <span className="sr-only" aria-live="polite">
        {at && `${at}: ${readings.map((r) => `${r.label} ${formatNumber(r.value as number, { digits })} ${y.unit}`).join(', ')}`}
      </span>
    </div>
  )
}

export function axisName(axis: PlotAxis): string {
  return [axis.label, axis.unit].filter(Boolean).join(', ')
}
