import { matrixPower, matrixProduct } from './matrix-power.ts'
import type { SampledJoint } from './sampled-joint.ts'

/**
 * The joint from one outer tick to the next, i_ref held: z ← P·z + g·i_ref − shift·Δ with Δ = H·z + d·i_ref, the angle's
 * increment between the two outer samples. θ counts from the last outer sample, so the free angle is no state here.
 */
export interface OuterSteps {
  readonly q: number
  readonly nz: number
  /** Powers of F that occur (at most two lengths of hold), and the matching inputs. */
  readonly powers: readonly Float64Array[]
  readonly inputs: readonly Float64Array[]
  /** Which power step k uses. */
  readonly length: Uint8Array
  /** Row H of step k, at k·nz. */
  readonly H: Float64Array
  readonly d: Float64Array
  readonly shift: Float64Array
  /** States of z at the start of the hyperperiod that are not 0 by construction: θ is, unless past angles are kept. */
  readonly start: Int32Array
}

export function outerSteps(joint: SampledJoint): OuterSteps {
  const { nz, timing, rows, direct, between, shift, theta } = joint
  const { p, q, tick, offset } = timing
  const shortest = Math.floor(p / q)
  const size = nz + 1
  const one = new Float64Array(size * size)
  for (let i = 0; i < nz; i++) {
    for (let j = 0; j < nz; j++) one[i * size + j] = joint.F[i * nz + j]
    one[i * size + nz] = joint.G[i]
  }
  one[size * size - 1] = 1
  const before = matrixPower(one, size, shortest - 1)
  const short = matrixProduct(one, before, size)
  const whole = q > 1 ? [short, matrixProduct(one, short, size)] : [short]
  const partial = q > 1 ? [before, short] : [before]
  const length = new Uint8Array(q)
  const H = new Float64Array(q * nz)
  const d = new Float64Array(q)
  for (let k = 0; k < q; k++) {
    const next = k + 1 === q ? 0 : k + 1
    const from = tick[k] + (offset[k] > 0 ? 1 : 0)
    const to = next === 0 ? p : tick[next] + (offset[next] > 0 ? 1 : 0)
    const kind = to - from - shortest
    length[k] = kind
    const M = between[next] ? partial[kind] : whole[kind]
    for (let j = 0; j < nz; j++) {
      let sum = 0
      for (let i = 0; i < nz; i++) sum += rows[next * nz + i] * M[i * size + j]
      H[k * nz + j] = sum
    }
    let sum = direct[next]
    for (let i = 0; i < nz; i++) sum += rows[next * nz + i] * M[i * size + nz]
    d[k] = sum
  }
  const keepsAngle = (joint.model.firmware.sensor_delay ?? 0) > 0
  const start = new Int32Array(keepsAngle ? nz : nz - 1)
  for (let i = 0, c = 0; i < nz; i++) if (keepsAngle || i !== theta) start[c++] = i
  return {
    q,
    nz,
    powers: whole.map((M) => pick(M, nz, size)),
    inputs: whole.map((M) => Float64Array.from({ length: nz }, (_, i) => M[i * size + nz])),
    length,
    H,
    d,
    shift,
    start,
  }
}

function pick(M: Float64Array, n: number, size: number): Float64Array {
  const out = new Float64Array(n * n)
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) out[i * n + j] = M[i * size + j]
  return out
}
