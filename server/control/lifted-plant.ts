import type { OuterSteps } from './outer-steps.ts'

/**
 * i_ref → angle increment over one hyperperiod, as one step: s⁺ = A·s + B·r, Δ = C·s + D·r, with r = (i_ref at outer ticks
 * 0…q−1) and Δ = (increments at outer ticks 1…q). D is lower triangular: an increment depends on earlier references only.
 */
export interface LiftedPlant {
  readonly q: number
  readonly n: number
  readonly A: Float64Array
  readonly B: Float64Array
  readonly C: Float64Array
  readonly D: Float64Array
}

export function emptyLift(q: number, n: number): LiftedPlant {
  return { q, n, A: new Float64Array(n * n), B: new Float64Array(n * q), C: new Float64Array(q * n), D: new Float64Array(q * q) }
}

let scratch: readonly [Float64Array, Float64Array, Float64Array] = [new Float64Array(0), new Float64Array(0), new Float64Array(0)]

/**
 * Lifts the outer steps over the hyperperiod (control-model.md §4).
 *
 * @param into  a lift of the same q and n to overwrite, for sweeps
 */
export function liftPlant(steps: OuterSteps, into: LiftedPlant = emptyLift(steps.q, steps.start.length)): LiftedPlant {
  const { q, nz, start, shift } = steps
  const { n, A, B, C, D } = into
  const width = n + q
  if (scratch[0].length < nz * width) scratch = [new Float64Array(nz * width), new Float64Array(nz * width), new Float64Array(width)]
  let [Z, next] = scratch
  const delta = scratch[2].length < width ? new Float64Array(width) : scratch[2]
  Z.fill(0, 0, nz * width)
  for (let i = 0; i < n; i++) Z[start[i] * width + i] = 1
  for (let k = 0; k < q; k++) {
    const P = steps.powers[steps.length[k]]
    const g = steps.inputs[steps.length[k]]
    // Inputs after k have not acted yet.
    const used = n + k + 1
    delta.fill(0)
    for (let j = 0; j < nz; j++) {
      const h = steps.H[k * nz + j]
      if (h === 0) continue
      for (let c = 0; c < used; c++) delta[c] += h * Z[j * width + c]
    }
    delta[n + k] += steps.d[k]
    for (let i = 0; i < nz; i++) {
      const row = i * width
      for (let c = 0; c < width; c++) next[row + c] = 0
      for (let j = 0; j < nz; j++) {
        const f = P[i * nz + j]
        if (f === 0) continue
        const from = j * width
        for (let c = 0; c < used; c++) next[row + c] += f * Z[from + c]
      }
      next[row + n + k] += g[i]
      if (shift[i] !== 0) for (let c = 0; c < used; c++) next[row + c] -= shift[i] * delta[c]
    }
    const t = Z
    Z = next
    next = t
    for (let c = 0; c < n; c++) C[k * n + c] = delta[c]
    for (let c = 0; c <= k; c++) D[k * q + c] = delta[n + c]
  }
  for (let i = 0; i < n; i++) {
    for (let c = 0; c < n; c++) A[i * n + c] = Z[start[i] * width + c]
    for (let c = 0; c < q; c++) B[i * q + c] = Z[start[i] * width + n + c]
  }
  return into
}
