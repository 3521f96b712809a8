import { useRef } from 'react'
import type { KeyboardEvent, PointerEvent } from 'react'
import { decimalsOf, formatFixed, formatNumber } from '../../lib/format.ts'
import { RulerDrawing } from './ruler-drawing.tsx'
import type { RulerDrawingProps } from './ruler-drawing.tsx'
import { rulerScale, stepValue } from './ruler-scale.ts'
import type { ScaleKind } from './ruler-scale.ts'
import { useWidth } from './use-width.ts'

export interface RulerProps extends Pick<RulerDrawingProps, 'value' | 'unstable' | 'fading' | 'policy' | 'flags'> {
  /** Name of the value, for a screen reader. */
  label: string
  min: number
  max: number
  /** The notch; null or absent when nothing is released yet. */
  released?: number | null
  scale?: ScaleKind
  unit?: string
  /** Default: as many decimals as `step` has, or three digits. */
  format?: (value: number) => string
  /** Bounds and released value in figures below the line. */
  figures?: boolean
  /** Fixed width; otherwise that of the place it stands in. */
  width?: number
  /** Makes it a slider. Called while the ball moves. */
  onChange?: (value: number) => void
  /** Called once when the ball comes to rest. */
  onSettle?: (value: number) => void
  step?: number
  id?: string
}

/** How near, in px, the ball falls into the notch while it is dragged. */
const CATCH = 4
const PAD = 6

/**
 * What a value may be and what it is: the notch is the released value, the ball the value as it stands. Ends hatched in oxide are
 * unstable with the other values as they stand; a plum stop is policy. With `onChange` a slider (WAI-ARIA APG): arrows step, Shift or
 * Page keys ten steps, Home and End the bounds; a step or a drag across the notch rests in it.
 */
export function Ruler({ label, min, max, value, released = null, scale: wanted = 'linear', unit = '', format: given, figures = true, width: fixed, onChange, onSettle, step, id, ...marks }: RulerProps) {
  const [box, measured] = useWidth<HTMLDivElement>(fixed ?? 182)
  const dragging = useRef<number | null>(null)
  const width = fixed ?? measured
  const format = given ?? (step === undefined ? formatNumber : (v: number) => formatFixed(v, decimalsOf(String(step))))
  const scale = rulerScale(min, max, wanted)
  const text = valueText({ value, released, unit, format, unstable: marks.unstable, policy: marks.policy })
  const drawing = <RulerDrawing {...marks} scale={scale} value={value} released={released} width={width} format={format} figures={figures} />

  if (!onChange) {
    return (
      <div ref={box} role="img" aria-label={`${label}: ${text}, from ${format(min)} to ${format(max)}`} className="ruler" style={{ width: fixed }} id={id}>
        {drawing}
      </div>
    )
  }

  const moveTo = (event: PointerEvent<HTMLDivElement>) => {
    const left = event.currentTarget.getBoundingClientRect().left
    const x = event.clientX - left
    const notchX = released === null ? null : PAD + scale.share(released) * (width - 2 * PAD)
    const raw = scale.at((x - PAD) / (width - 2 * PAD))
    const next = notchX !== null && Math.abs(x - notchX) <= CATCH ? (released as number) : round(raw, scale.kind, max - min, step)
    dragging.current = next
    onChange(next)
  }
  const onKey = (event: KeyboardEvent) => {
    const large = event.shiftKey || event.key.startsWith('Page') ? 10 : 1
    const from = value ?? released ?? min
    const next =
      event.key === 'ArrowRight' || event.key === 'ArrowUp' || event.key === 'PageUp' ? stepValue(scale, from, large, released, step)
      : event.key === 'ArrowLeft' || event.key === 'ArrowDown' || event.key === 'PageDown' ? stepValue(scale, from, -large, released, step)
      : event.key === 'Home' ? min
      : event.key === 'End' ? max
      : null
    if (next === null) return
    event.preventDefault()
    onChange(next)
    onSettle?.(next)
  }
  return (
    <div
      ref={box}
      id={id}
      className="ruler"
      style={{ width: fixed }}
      role="slider"
      tabIndex={0}
      aria-label={label}
      aria-valuemin={min}
      aria-valuemax={max}
      aria-valuenow={value ?? undefined}
      aria-valuetext={text}
      onKeyDown={onKey}
      onPointerDown={(event) => {
        if (event.button !== 0) return
        event.currentTarget.setPointerCapture(event.pointerId)
        moveTo(event)
      }}
      onPointerMove={(event) => {
        if (dragging.current !== null) moveTo(event)
      }}
      onPointerUp={() => {
        if (dragging.current !== null) onSettle?.(dragging.current)
        dragging.current = null
      }}
      onPointerCancel={() => {
        dragging.current = null
      }}
    >
      {drawing}
    </div>
  )
}

/** A dragged value is no finer than the reader could mean: three digits on a log scale, a five-hundredth of the range on a linear one. */
function round(value: number, kind: ScaleKind, range: number, step?: number): number {
  if (step !== undefined) return Number((Math.round(value / step) * step).toPrecision(12))
  if (kind === 'log') return Number(value.toPrecision(3))
  const fine = 10 ** Math.floor(Math.log10(range / 500))
  return Number((Math.round(value / fine) * fine).toPrecision(12))
}

interface TextParts extends Pick<RulerProps, 'value' | 'unstable' | 'policy'> {
  released: number | null
  unit: string
  format: (value: number) => string
}

function valueText({ value, released, unit, format, unstable = [], policy }: TextParts): string {
  const of = (v: number) => [format(v), unit].filter(Boolean).join(' ')
  const parts = [value === null ? 'no value' : of(value)]
  if (value !== null && released === value) parts.push('unchanged')
  else if (released !== null) parts.push(`released ${of(released)}`)
  if (value !== null && unstable.some((u) => value >= u.from && value <= u.to)) parts.push('unstable here')
  else if (unstable.length > 0) parts.push(`unstable ${unstable.map((u) => `${format(u.from)} to ${format(u.to)}`).join(' and ')}`)
  if (policy) {
    const missed = value !== null && (policy.forbidden === 'below' ? value < policy.limit : value > policy.limit)
    parts.push(`policy asks ${policy.forbidden === 'below' ? 'at least' : 'at most'} ${of(policy.limit)}${missed ? ', missed' : ''}`)
  }
  return parts.join(', ')
}
