import type { ReactNode } from 'react'

export type BlockName = 'position' | 'velocity' | 'current' | 'driveTrain' | 'velocityWindow' | 'sensor'

export interface Box {
  left: number
  right: number
  top: number
  bottom: number
}

export interface CascadeBoxes {
  width: number
  height: number
  blocks: Partial<Record<BlockName, Box>>
}

export interface CascadeWiresProps {
  boxes: CascadeBoxes
  mode: 'position' | 'velocity' | 'current'
  outerRate: string
  currentRate: string
}

/** Signals run this far below the upper edge of the blocks. */
const LANE = 58
/** Radius of a summing point, and its distance from the block it feeds. */
const SUM = 9
const SUM_BEFORE = 26

/** Wires, summing points and task spans of the cascade, drawn from where the blocks stand. Decorative: the blocks say the same in words. */
export function CascadeWires({ boxes, mode, outerRate, currentRate }: CascadeWiresProps) {
  const { position: p, velocity: v, current: c, driveTrain: d, velocityWindow: w, sensor: s } = boxes.blocks
  if (!c || !d) return null
  const y = c.top + LANE
  const outer = mode === 'position' ? p : v
  const sums = { position: p && p.left - SUM_BEFORE, velocity: v && v.left - SUM_BEFORE + 2, current: c.left - SUM_BEFORE + 2 }
  const first = sums[mode] ?? sums.current
  const returns = c.bottom + 22
  const sensedY = s && (s.top + s.bottom) / 2
  const lowest = Math.max(w?.bottom ?? 0, s?.bottom ?? 0) + 18
  const dot = sums.current
  return (
    <svg width={boxes.width} height={boxes.height} viewBox={`0 0 ${boxes.width} ${boxes.height}`} aria-hidden="true">
      {outer && v && <Span left={outer.left} right={v.right} words={`outer task ${outerRate}`} />}
      <Span left={c.left} right={c.right} words={`current task ${currentRate}`} />
      <Span left={d.left} right={d.right} words="continuous" />

      <Wire path={`M${first - 30} ${y}H${first - SUM - 1}`} end={[first - SUM, y, 'right']} />
      <Label x={first - 4} y={y - 16} middle>{mode === 'position' ? 'θ ref' : mode === 'velocity' ? 'ω ref' : 'i ref'}</Label>
      {mode === 'position' && p && v && sums.position !== undefined && sums.velocity !== undefined && (
        <>
          <Wire path={`M${sums.position + SUM} ${y}H${p.left}`} end={[p.left, y, 'right']} />
          <Wire path={`M${p.right} ${y}H${sums.velocity - SUM}`} end={[sums.velocity - SUM, y, 'right']} />
          <Label x={sums.velocity} y={y - 16} middle>ω ref</Label>
        </>
      )}
      {mode !== 'current' && v && sums.velocity !== undefined && (
        <>
          <Wire path={`M${sums.velocity + SUM} ${y}H${v.left}`} end={[v.left, y, 'right']} />
          <Wire path={`M${v.right} ${y}H${sums.current - SUM}`} end={[sums.current - SUM, y, 'right']} />
          <Label x={sums.current} y={y - 16} middle>i ref</Label>
        </>
      )}
      <Wire path={`M${sums.current + SUM} ${y}H${c.left}`} end={[c.left, y, 'right']} />
      <Wire path={`M${c.right} ${y}H${d.left}`} end={[d.left, y, 'right']} />
      <Label x={(c.right + d.left) / 2} y={y - 9} middle>u</Label>

      <Wire path={`M${d.left + 20} ${d.bottom}V${returns}H${sums.current}V${y + SUM}`} end={[sums.current, y + SUM, 'up']} />
      <Label x={sums.current + 8} y={returns - 6}>i</Label>
      {s && sensedY !== undefined && (
        <>
          <Wire path={`M${d.right - 40} ${d.bottom}V${s.top}`} end={[d.right - 40, s.top, 'down']} />
          <Label x={d.right - 32} y={(d.bottom + s.top) / 2 + 4}>θ</Label>
        </>
      )}
      {mode !== 'current' && s && w && sensedY !== undefined && sums.velocity !== undefined && (
        <>
          <Wire path={`M${s.left} ${sensedY}H${w.right}`} end={[w.right, sensedY, 'left']} />
          <Label x={w.right + 10} y={sensedY - 8}>θ sensed</Label>
          <Wire path={`M${w.left} ${sensedY}H${sums.velocity}V${y + SUM}`} end={[sums.velocity, y + SUM, 'up']} />
          <Label x={sums.velocity + 6} y={sensedY - 8}>ω</Label>
        </>
      )}
      {mode === 'position' && s && sensedY !== undefined && sums.position !== undefined && (
        <>
          <circle cx={dot} cy={sensedY} r="2.6" fill="var(--ink)" />
          <Wire path={`M${dot} ${sensedY}V${lowest}H${sums.position}V${y + SUM}`} end={[sums.position, y + SUM, 'up']} />
        </>
      )}
      {mode === 'position' && sums.position !== undefined && <Summing x={sums.position} y={y} />}
      {mode !== 'current' && sums.velocity !== undefined && <Summing x={sums.velocity} y={y} />}
      <Summing x={sums.current} y={y} />
    </svg>
  )
}

type Way = 'right' | 'left' | 'up' | 'down'

const HEADS: Record<Way, string> = { right: 'l-7 -4m7 4l-7 4', left: 'l7 -4m-7 4l7 4', up: 'l-4 7m4 -7l4 7', down: 'l-4 -7m4 7l4 -7' }

function Wire({ path, end: [x, y, way] }: { path: string; end: [number, number, Way] }) {
  return <path d={`${path}M${x} ${y}${HEADS[way]}`} fill="none" stroke="var(--ink)" strokeWidth="1.3" />
}

function Summing({ x, y }: { x: number; y: number }) {
  return (
    <>
      <circle cx={x} cy={y} r={SUM} fill="var(--paper)" stroke="var(--ink)" strokeWidth="1.3" />
      <path d={`M${x - 6.3} ${y - 6.3}l12.6 12.6M${x - 6.3} ${y + 6.3}l12.6 -12.6`} stroke="var(--hairline)" strokeWidth="1" />
      <text x={x - 16} y={y + 21} className="num ink" style={{ fontSize: 13 }}>{'\u2212'}</text>
    </>
  )
}

function Label({ x, y, middle = false, children }: { x: number; y: number; middle?: boolean; children: ReactNode }) {
  return (
    <text x={x} y={y} className="ink" textAnchor={middle ? 'middle' : undefined}>
      {children}
    </text>
  )
}

/** A dimension line over the blocks one task runs. */
function Span({ left, right, words }: { left: number; right: number; words: string }) {
  return (
    <>
      <path d={`M${left} 6v14M${right} 6v14M${left} 12H${right}`} stroke="var(--ink-2)" strokeWidth=".8" />
      <path d={`M${left} 12l9 -2.6v5.2zM${right} 12l-9 -2.6v5.2z`} fill="var(--ink-2)" />
      <text x={(left + right) / 2} y="16" textAnchor="middle" style={{ paintOrder: 'stroke', stroke: 'var(--paper)', strokeWidth: 12 }}>
        {words}
      </text>
    </>
  )
}
