/** Samples kept for plots. */

export interface Traces {
  t: Float64Array
  /** In the closed mode's own unit: rad, rad/s or A. */
  reference: Float64Array
  /** True output angle and speed, rad, rad/s. */
  theta: Float64Array
  omega: Float64Array
  i: Float64Array
  /** Voltage request, V, before its clamp and delay. */
  u: Float64Array
  /** Voltage on the motor from this sample's tick on, V. */
  v: Float64Array
}

/** Every sample of a run, taken at the current ticks before the tick's work; `u` and `v` are what that work gives. */
export interface Record {
  count: number
  T_c: number
  reference: Float64Array
  theta: Float64Array
  omega: Float64Array
  i: Float64Array
  u: Float64Array
  v: Float64Array
}

/**
 * At most about `points` of a run's samples, true ones, in order; none for 0.
 *
 * Of each bucket the samples with the least and greatest current and request are kept, so that a peak of a
 * single tick stays visible; the first and last samples always.
 */
export function decimate(record: Record, points: number): Traces {
  const { T_c } = record
  const count = points === 0 ? 0 : record.count
  const kept = count <= points ? null : keptTicks(record, Math.max(1, Math.floor(points / 4)))
  const n = kept === null ? count : kept.length
  const pick = (from: Float64Array): Float64Array => {
    if (kept === null) return from.slice(0, count)
    const out = new Float64Array(n)
    for (let k = 0; k < n; k++) out[k] = from[kept[k]]
    return out
  }
  const t = new Float64Array(n)
  for (let k = 0; k < n; k++) t[k] = (kept === null ? k : kept[k]) * T_c
  return { t, reference: pick(record.reference), theta: pick(record.theta), omega: pick(record.omega), i: pick(record.i), u: pick(record.u), v: pick(record.v) }
}

function keptTicks(record: Record, buckets: number): Int32Array {
  const { count, i, u } = record
  const kept = new Int32Array(4 * buckets + 2)
  const four = new Int32Array(4)
  let n = 1
  for (let b = 0; b < buckets; b++) {
    const from = Math.floor((b * count) / buckets)
    const to = Math.floor(((b + 1) * count) / buckets)
    four.fill(from)
    for (let k = from + 1; k < to; k++) {
      if (i[k] < i[four[0]]) four[0] = k
      if (i[k] > i[four[1]]) four[1] = k
      if (u[k] < u[four[2]]) four[2] = k
      if (u[k] > u[four[3]]) four[3] = k
    }
    four.sort()
    for (let k = 0; k < 4; k++) if (four[k] > kept[n - 1]) kept[n++] = four[k]
  }
  if (kept[n - 1] < count - 1) kept[n++] = count - 1
  return kept.subarray(0, n)
}
