/** Where a value stands on a ruler, and which values its marks and steps fall on. Pure. */

export type ScaleKind = 'linear' | 'log'

export interface RulerScale {
  kind: ScaleKind
  min: number
  max: number
  /** Share of the way from min to max, held to 0…1. */
  share: (value: number) => number
  /** The value at a share. */
  at: (share: number) => number
}

/** A log scale needs positive bounds; otherwise the scale is linear. */
export function rulerScale(min: number, max: number, wanted: ScaleKind): RulerScale {
  const log = wanted === 'log' && min > 0 && max > min
  const f = log ? Math.log : (v: number) => v
  const g = log ? Math.exp : (v: number) => v
  const span = f(max) - f(min)
  return {
    kind: log ? 'log' : 'linear',
    min,
    max,
    share: (value) => (span === 0 ? 0 : Math.min(1, Math.max(0, (f(Math.min(max, Math.max(min, value))) - f(min)) / span))),
    at: (share) => Math.min(max, Math.max(min, g(f(min) + share * span))),
  }
}

export interface Tick {
  value: number
  major: boolean
}

/** Quarters on a linear scale; 1, 2 and 5 of each decade on a log scale, the ones long. */
export function rulerTicks(scale: RulerScale): Tick[] {
  if (scale.kind === 'linear') return [0, 0.25, 0.5, 0.75, 1].map((s) => ({ value: scale.at(s), major: s === 0 || s === 1 }))
  const ticks: Tick[] = []
  for (let decade = Math.floor(Math.log10(scale.min)); decade <= Math.ceil(Math.log10(scale.max)); decade++) {
    for (const m of [1, 2, 5]) {
      const value = m * 10 ** decade
      if (value >= scale.min * (1 - 1e-9) && value <= scale.max * (1 + 1e-9)) ticks.push({ value, major: m === 1 })
    }
  }
  return ticks
}

/**
 * The value one or more steps on. A linear scale moves by `step` (default: a hundredth of the range, rounded to 1, 2 or 5);
 * a log scale by a fortieth of a decade, to three digits. A step across the notch stops in it: that is what a detent does.
 */
export function stepValue(scale: RulerScale, value: number, steps: number, notch: number | null, step?: number): number {
  // A bound is taken as it is; only what lies between is rounded.
  const held = (v: number, digits: number) => (v >= scale.max ? scale.max : v <= scale.min ? scale.min : Number(v.toPrecision(digits)))
  let next: number
  if (scale.kind === 'log' && step === undefined) next = held(value * 10 ** (steps / 40), 3)
  else {
    const size = step ?? niceStep(scale.max - scale.min)
    next = held(Math.round(value / size + steps) * size, 12)
  }
  if (notch !== null && value !== notch && (notch - value) * (next - notch) >= 0 && (next - value) * steps > 0) return notch
  return Math.min(scale.max, Math.max(scale.min, next))
}

function niceStep(range: number): number {
  const raw = range / 100
  const power = 10 ** Math.floor(Math.log10(raw))
  const m = raw / power
  return (m < 1.5 ? 1 : m < 3.5 ? 2 : m < 7.5 ? 5 : 10) * power
}
