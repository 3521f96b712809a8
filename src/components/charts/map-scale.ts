/** Axes of the stability map: cells of equal width over values that rise evenly or by a constant ratio. Pure. */

export interface MapAxis {
  label: string
  unit: string
  /** Ascending, one for each column or row. */
  values: readonly number[]
  log?: boolean
}

/** A set of values marked on the map. */
export interface MapPoint {
  x: number
  y: number
  label: string
}

export interface MapMargin {
  verdict: 'stable' | 'on the boundary' | 'unstable'
  phaseMarginDeg: number | null
  gainMarginDb: number | null
  withinPolicy: boolean
}

/** Column or row of a value, fractional: 0 is the first cell's middle. */
export function placeOf(axis: MapAxis, value: number): number {
  const f = axis.log ? Math.log : (v: number) => v
  const n = axis.values.length
  if (n < 2) return 0
  return ((f(value) - f(axis.values[0])) / (f(axis.values[n - 1]) - f(axis.values[0]))) * (n - 1)
}

/** Round values along the axis: 1, 2, 5 of each decade on a log axis, else about five steps of 1, 2 or 5. */
export function axisTicks(axis: MapAxis): number[] {
  const low = axis.values[0]
  const high = axis.values[axis.values.length - 1]
  const ticks: number[] = []
  if (axis.log) {
    for (let d = Math.floor(Math.log10(low)); d <= Math.ceil(Math.log10(high)); d++) {
      for (const m of [1, 2, 5]) if (m * 10 ** d >= low * 0.999 && m * 10 ** d <= high * 1.001) ticks.push(Number((m * 10 ** d).toPrecision(3)))
    }
    return ticks
  }
  const raw = (high - low) / 5
  const power = 10 ** Math.floor(Math.log10(raw))
  const step = (raw / power < 1.5 ? 1 : raw / power < 3.5 ? 2 : raw / power < 7.5 ? 5 : 10) * power
  for (let v = Math.ceil(low / step - 1e-9) * step; v <= high + step * 1e-9; v += step) ticks.push(Number(v.toPrecision(6)))
  return ticks
}

/** Lower ends of the five classes of phase margin, in degrees. */
export const CLASSES = [0, 20, 30, 45, 60] as const

/** 1 … 5 for map-1 … map-5. "None up to 180°" is the best class. */
export function marginClass(phaseMarginDeg: number | null): 1 | 2 | 3 | 4 | 5 {
  if (phaseMarginDeg === null) return 5
  let at = 1
  CLASSES.forEach((low, i) => {
    if (phaseMarginDeg >= low) at = i + 1
  })
  return at as 1 | 2 | 3 | 4 | 5
}
