import type { SeriesRole } from './series-style.ts'

export interface PlotSeries {
  label: string
  role: SeriesRole
  /** Ascending. Series may each have their own. */
  x: readonly number[]
  /** Null breaks the line. */
  y: readonly (number | null)[]
  /** Held until the next value, as a set-point is. */
  stepped?: boolean
}

/** A null is a gap the series itself has; undefined, a point only another series has: the line runs over it. */
export interface AlignedSeries {
  x: number[]
  ys: (number | null | undefined)[][]
}

/** All series over one ascending x. Series over the same x are taken as they are. */
export function alignSeries(series: readonly PlotSeries[]): AlignedSeries {
  if (series.length === 0) return { x: [], ys: [] }
  const first = series[0].x
  const same = series.every((s) => s.x === first || (s.x.length === first.length && s.x.every((v, i) => v === first[i])))
  if (same) return { x: [...first], ys: series.map((s) => [...s.y]) }
  const x = [...new Set(series.flatMap((s) => s.x))].sort((a, b) => a - b)
  const place = new Map(x.map((v, i) => [v, i]))
  const ys = series.map((s) => {
    const column: (number | null | undefined)[] = new Array<undefined>(x.length).fill(undefined)
    s.x.forEach((v, i) => (column[place.get(v) as number] = s.y[i]))
    return column
  })
  return { x, ys }
}

/** Value of a series at x for the cursor: the point nearest, if it is the series' own or lies between two of them. */
export function valueAt(series: PlotSeries, x: number): number | null {
  const n = series.x.length
  if (n === 0 || x < series.x[0] || x > series.x[n - 1]) return null
  let low = 0
  let high = n - 1
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (series.x[middle] <= x) low = middle
    else high = middle
  }
  if (series.stepped) return series.y[series.x[high] <= x ? high : low]
  return series.y[x - series.x[low] <= series.x[high] - x ? low : high]
}
