import { useEffect, useRef, useState } from 'react'
import type { KeyboardEvent, MouseEvent, ReactNode } from 'react'
import { formatDb, formatDegrees, quantityText } from '../../lib/format.ts'
import { useWidth } from '../ui/use-width.ts'
import { ChartFrame } from './chart-frame.tsx'
import { drawMap } from './map-canvas.ts'
import type { MapCells } from './map-canvas.ts'
import { MapLegend } from './map-legend.tsx'
import { MapOverlay } from './map-overlay.tsx'
import { placeOf } from './map-scale.ts'
import type { MapAxis, MapMargin, MapPoint } from './map-scale.ts'
import { saveSvg } from './svg-image.ts'
import { useThemeKey } from './use-theme-key.ts'

export interface StabilityMapProps {
  title?: string
  level?: 2 | 3
  aux?: ReactNode
  x: MapAxis
  y: MapAxis
  /** Rows of y, each with its columns of x; null where not yet computed. */
  cells: MapCells
  released?: MapPoint
  candidate?: MapPoint
  /** Enter or a press on a cell: its two values. */
  onPick?: (values: { x: number; y: number; column: number; row: number }) => void
  height?: number
  className?: string
}

const LEFT = 50
const TOP = 20
const RIGHT = 8
const BOTTOM = 34

/** Smallest phase margin over two parameters. Arrows move a cell cursor whose figures are announced; Enter or a press picks the cell. */
export function StabilityMap({ title = 'Stability map', level, aux = 'smallest phase margin', x, y, cells, released, candidate, onPick, height = 400, className }: StabilityMapProps) {
  const [frame, width] = useWidth<HTMLDivElement>(440)
  const canvas = useRef<HTMLCanvasElement>(null)
  const svg = useRef<SVGSVGElement>(null)
  const [cell, setCell] = useState<{ i: number; j: number } | null>(null)
  const theme = useThemeKey()
  const [w, h] = [width - LEFT - RIGHT, height - TOP - BOTTOM]
  const columns = x.values.length
  const rows = y.values.length

  useEffect(() => {
    if (canvas.current) drawMap(canvas.current, cells, w, h)
  }, [cells, w, h, theme])

  const start = () => {
    const p = candidate ?? released
    const near = (axis: MapAxis, v: number | undefined) => (v === undefined ? 0 : Math.min(axis.values.length - 1, Math.max(0, Math.round(placeOf(axis, v)))))
    return { i: near(x, p?.x), j: near(y, p?.y) }
  }
  const pick = (at: { i: number; j: number }) => onPick?.({ x: x.values[at.i], y: y.values[at.j], column: at.i, row: at.j })
  const onKey = (event: KeyboardEvent) => {
    const moves: Record<string, [number, number]> = { ArrowRight: [1, 0], ArrowLeft: [-1, 0], ArrowUp: [0, 1], ArrowDown: [0, -1] }
    if ((event.key === 'Enter' || event.key === ' ') && cell) {
      event.preventDefault()
      pick(cell)
    }
    if (event.key === 'Escape') setCell(null)
    const move = moves[event.key]
    if (!move) return
    event.preventDefault()
    const from = cell ?? start()
    setCell(cell ? { i: Math.min(columns - 1, Math.max(0, from.i + move[0])), j: Math.min(rows - 1, Math.max(0, from.j + move[1])) } : from)
  }
  const cellUnder = (event: MouseEvent) => {
    const box = canvas.current?.getBoundingClientRect()
    if (!box) return null
    const i = Math.floor(((event.clientX - box.left) / box.width) * columns)
    const j = rows - 1 - Math.floor(((event.clientY - box.top) / box.height) * rows)
    return i >= 0 && i < columns && j >= 0 && j < rows ? { i, j } : null
  }
  const words = cell && cellWords(x, y, cell, cells[cell.j]?.[cell.i] ?? null)

  return (
    <ChartFrame
      title={title}
      level={level}
      aux={aux}
      className={className}
      legend={<MapLegend />}
      numbers={() => ({
        head: [`${x.label}, ${x.unit}`, `${y.label}, ${y.unit}`, 'verdict', 'phase margin, °', 'gain margin, dB', 'within policy'],
        rows: cells.flatMap((row, j) => row.map((c, i) => [x.values[i], y.values[j], c?.verdict ?? 'not yet computed', c?.phaseMarginDeg, c?.gainMarginDb, c === null ? '' : c.withinPolicy ? 'yes' : 'no'])),
      })}
      onImage={(name) => svg.current && canvas.current && saveSvg(name, svg.current, { canvas: canvas.current, x: LEFT, y: TOP, width: w, height: h })}
    >
      <div
        ref={frame}
        className="relative mt-1"
        style={{ height, cursor: onPick ? 'crosshair' : undefined }}
        role="group"
        tabIndex={0}
        aria-label={`${title}: ${y.label} over ${x.label}. Arrow keys read cells${onPick ? ', Enter takes the values' : ''}.`}
        onKeyDown={onKey}
        onMouseMove={(event) => setCell(cellUnder(event))}
        onMouseLeave={() => setCell(null)}
        onClick={(event) => {
          const at = cellUnder(event)
          if (at) pick(at)
        }}
      >
        <canvas ref={canvas} aria-hidden="true" className="absolute" style={{ left: LEFT, top: TOP, width: w, height: h }} />
        <MapOverlay svgRef={svg} x={x} y={y} width={width} height={height} area={{ left: LEFT, top: TOP, width: w, height: h }} released={released} candidate={candidate} cell={cell} />
      </div>
      <p className="min-h-[18px] text-13 text-ink-2" aria-live="polite">
        {words}
      </p>
    </ChartFrame>
  )
}

export default StabilityMap

function cellWords(x: MapAxis, y: MapAxis, at: { i: number; j: number }, margin: MapMargin | null): string {
  const where = `${x.label} ${quantityText(x.values[at.i], x.unit)}, ${y.label} ${quantityText(y.values[at.j], y.unit)}`
  if (margin === null) return `${where}: not yet computed`
  if (margin.verdict !== 'stable') return `${where}: ${margin.verdict}`
  const phase = margin.phaseMarginDeg === null ? 'none up to 180°' : `${formatDegrees(margin.phaseMarginDeg)}°`
  const gain = margin.gainMarginDb === null ? 'above 60 dB' : `${formatDb(margin.gainMarginDb)} dB`
  return `${where}: stable, phase margin ${phase}, gain margin ${gain}, ${margin.withinPolicy ? 'within policy' : 'outside policy'}`
}
