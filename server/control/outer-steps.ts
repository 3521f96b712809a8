import { matrixPower, matrixProduct, powerWorkspace, type PowerWorkspace } from './matrix-power.ts'
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

/** The steps of a joint. */
export function outerSteps(joint: SampledJoint): OuterSteps {
  return stepsInto(joint, freshArrays)
}

/** As outerSteps, for steps that are read before the next joint's are asked for this way: their arrays are written anew then. */
export function passingOuterSteps(joint: SampledJoint): OuterSteps {
  return stepsInto(joint, passingArrays)
}

/** What the steps are written into. */
interface Arrays {
  readonly powers: readonly Float64Array[]
  readonly inputs: readonly Float64Array[]
  readonly length: Uint8Array
  readonly H: Float64Array
  readonly d: Float64Array
  readonly start: Int32Array
}

function freshArrays(nz: number, q: number, starts: number): Arrays {
  const kinds = Array.from({ length: q > 1 ? 2 : 1 })
  return {
    powers: kinds.map(() => new Float64Array(nz * nz)), inputs: kinds.map(() => new Float64Array(nz)),
    length: new Uint8Array(q), H: new Float64Array(q * nz), d: new Float64Array(q), start: new Int32Array(starts),
  }
}

let passing: { readonly nz: number; readonly q: number; readonly starts: number; readonly arrays: Arrays } | null = null

function passingArrays(nz: number, q: number, starts: number): Arrays {
  if (!passing || passing.nz !== nz || passing.q !== q || passing.starts !== starts) passing = { nz, q, starts, arrays: freshArrays(nz, q, starts) }
  return passing.arrays
}

function stepsInto(joint: SampledJoint, arraysOf: (nz: number, q: number, starts: number) => Arrays): OuterSteps {
  const { nz, timing, rows, direct, between, shift, theta } = joint
  const { p, q, tick, offset } = timing
  const shortest = Math.floor(p / q)
  const size = nz + 1
  const { one, before, short, long, power } = scratchOf(size)
  one.fill(0)
  for (let i = 0; i < nz; i++) {
    for (let j = 0; j < nz; j++) one[i * size + j] = joint.F[i * nz + j]
    one[i * size + nz] = joint.G[i]
  }
  one[size * size - 1] = 1
  matrixPower(one, size, shortest - 1, before, power)
  matrixProduct(one, before, size, short)
  const kinds = q > 1 ? 2 : 1
  if (kinds === 2) matrixProduct(one, short, size, long)
  const keepsAngle = (joint.model.firmware.sensor_delay ?? 0) > 0
  const { powers, inputs, length, H, d, start } = arraysOf(nz, q, keepsAngle ? nz : nz - 1)
  for (let k = 0; k < q; k++) {
    const next = k + 1 === q ? 0 : k + 1
    const from = tick[k] + (offset[k] > 0 ? 1 : 0)
    const to = next === 0 ? p : tick[next] + (offset[next] > 0 ? 1 : 0)
    const kind = to - from - shortest
    length[k] = kind
    const M = between[next] ? (kind === 0 ? before : short) : kind === 0 ? short : long
    for (let j = 0; j < nz; j++) {
      let sum = 0
      for (let i = 0; i < nz; i++) sum += rows[next * nz + i] * M[i * size + j]
      H[k * nz + j] = sum
    }
    let sum = direct[next]
    for (let i = 0; i < nz; i++) sum += rows[next * nz + i] * M[i * size + nz]
    d[k] = sum
  }
  for (let i = 0, c = 0; i < nz; i++) if (keepsAngle || i !== theta) start[c++] = i
  split(short, nz, size, powers[0], inputs[0])
  if (kinds === 2) split(long, nz, size, powers[1], inputs[1])
  return { q, nz, powers, inputs, length, H, d, shift, start }
}

interface Scratch {
  readonly one: Float64Array
  readonly before: Float64Array
  readonly short: Float64Array
  readonly long: Float64Array
  readonly power: PowerWorkspace
}

const scratches = new Map<number, Scratch>()
function scratchOf(size: number): Scratch {
  let scratch = scratches.get(size)
  if (!scratch) {
    const matrix = (): Float64Array => new Float64Array(size * size)
    scratch = { one: matrix(), before: matrix(), short: matrix(), long: matrix(), power: powerWorkspace(size) }
    scratches.set(size, scratch)
  }
  return scratch
}

/** The leading n × n part of M, and the first n of its last column. */
function split(M: Float64Array, n: number, size: number, part: Float64Array, column: Float64Array): void {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) part[i * n + j] = M[i * size + j]
    column[i] = M[i * size + n]
  }
}
