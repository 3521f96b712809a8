import type { RefObject } from 'react'
import { axisTicks, placeOf } from './map-scale.ts'
import type { MapAxis, MapPoint } from './map-scale.ts'

export interface MapOverlayProps {
  svgRef: RefObject<SVGSVGElement | null>
  x: MapAxis
  y: MapAxis
  width: number
  height: number
  area: { left: number; top: number; width: number; height: number }
  released?: MapPoint
  candidate?: MapPoint
  cell: { i: number; j: number } | null
}

const HALO = { fontWeight: 500, paintOrder: 'stroke', stroke: 'var(--paper)', strokeWidth: 4, strokeLinejoin: 'round' } as const

/** Axes, released notch, candidate ball and the cell under the cursor, over the canvas of cells. */
export function MapOverlay({ svgRef, x, y, width, height, area, released, candidate, cell }: MapOverlayProps) {
  const cellW = area.width / x.values.length
  const cellH = area.height / y.values.length
  const left = (v: number) => area.left + (placeOf(x, v) + 0.5) * cellW
  const top = (v: number) => area.top + area.height - (placeOf(y, v) + 0.5) * cellH
  const bottom = area.top + area.height
  const r = released && { x: left(released.x), y: top(released.y) }
  const c = candidate && { x: left(candidate.x), y: top(candidate.y) }
  return (
    <svg ref={svgRef} width={width} height={height} viewBox={`0 0 ${width} ${height}`} className="pointer-events-none absolute inset-0" aria-hidden="true">
      <path d={`M${area.left} ${area.top}V${bottom}H${area.left + area.width}`} fill="none" stroke="var(--ink-2)" />
      {axisTicks(y).map((v) => (
        <g key={v}>
          <path d={`M${area.left - 4} ${top(v)}h4`} stroke="var(--ink-2)" />
          <text className="num" x={area.left - 7} y={top(v) + 4} textAnchor="end">{v}</text>
        </g>
      ))}
      {axisTicks(x).map((v) => (
        <g key={v}>
          <path d={`M${left(v)} ${bottom}v4`} stroke="var(--ink-2)" />
          <text className="num" x={left(v)} y={bottom + 16} textAnchor="middle">{v}</text>
        </g>
      ))}
      <text x={area.left + area.width} y={height - 3} textAnchor="end">{`${x.label}, ${x.unit}`}</text>
      <text x="12" y="12">{`${y.label}, ${y.unit}`}</text>
      {cell && <rect x={area.left + cell.i * cellW} y={bottom - (cell.j + 1) * cellH} width={cellW} height={cellH} fill="none" stroke="var(--brass)" strokeWidth="2" />}
      {r && c && <path d={`M${r.x} ${r.y}L${c.x} ${c.y}`} stroke="var(--ink)" strokeWidth="1.2" strokeDasharray="3 3" />}
      {r && released && (
        <>
          <path d={`M${r.x - 8} ${r.y - 5}l8 10 8-10`} fill="none" stroke="var(--paper)" strokeWidth="5" />
          <path d={`M${r.x - 8} ${r.y - 5}l8 10 8-10`} fill="none" stroke="var(--ink)" strokeWidth="2.2" />
          <text x={r.x + 10} y={r.y + 16} className="ink" style={HALO}>{released.label}</text>
        </>
      )}
      {c && candidate && (
        <>
          <circle cx={c.x} cy={c.y} r="6" fill="var(--brass)" stroke="var(--paper)" strokeWidth="2" />
          <text x={c.x > width - 90 ? c.x - 12 : c.x + 12} y={c.y + 4} textAnchor={c.x > width - 90 ? 'end' : 'start'} className="ink" style={HALO}>{candidate.label}</text>
        </>
      )}
    </svg>
  )
}
