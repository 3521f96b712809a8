/**
 * The drive train as one of up to four linear systems: load sliding or stuck, gear teeth in contact or in the gap.
 *
 * States as in plant.ts; inputs, held over an interval, are v (applied voltage), τ (torque on the load side) and
 * o (offset of the spring's rest position). control-model.md §1, §6.
 */
import { zeroOrderHold } from '../discretise.ts'
import type { Plant } from '../model.ts'
import { plantMatrices } from '../plant.ts'

/** Number of held inputs: v, τ, o. */
export const INPUTS = 3

export interface Structure {
  /** Number of states. */
  n: number
  /** n×n, row by row. */
  A: Float64Array
  /** n×3, row by row. */
  B: Float64Array
  /** 1-norm of A after diagonal scaling, 1/s: its inverse is an interval in which the system moves gently. */
  norm: number
}

/** Which state is what, for both drive trains. */
export interface StateIndex {
  i: number
  omegaMotor: number
  omegaLoad: number
  /** −1 when rigid. */
  delta: number
  thetaLoad: number
}

export const RIGID: StateIndex = { i: 0, omegaMotor: 1, omegaLoad: 1, delta: -1, thetaLoad: 2 }
export const COMPLIANT: StateIndex = { i: 0, omegaMotor: 1, omegaLoad: 2, delta: 3, thetaLoad: 4 }

/** The linear system for one combination of friction and contact. */
export function structure(plant: Plant, T_winding: number, stuck: boolean, gap: boolean): Structure {
  const { n, compliant, A, B: fromVoltage, E } = plantMatrices(gap ? { ...plant, k_s: 0, d_s: 0 } : plant, T_winding)
  const at = compliant ? COMPLIANT : RIGID
  const B = new Float64Array(n * INPUTS)
  for (let r = 0; r < n; r++) {
    B[r * INPUTS] = fromVoltage[r]
    B[r * INPUTS + 1] = -E[r]
    if (compliant) B[r * INPUTS + 2] = -A[r * n + at.delta]
  }
  if (stuck) {
    for (const r of [at.omegaLoad, at.thetaLoad]) {
      A.fill(0, r * n, (r + 1) * n)
      B.fill(0, r * INPUTS, (r + 1) * INPUTS)
    }
  }
  return { n, A, B, norm: balancedNorm(A, n) }
}

/**
 * Exact hold over `h` seconds: x(h) = Ad·x + Bd·[v, τ, o].
 *
 * A state that stands still keeps an exact row of the identity, so that a stuck joint's angle does not creep by rounding.
 */
export function transition(system: Structure, h: number): { Ad: Float64Array; Bd: Float64Array } {
  const { n, A, B } = system
  const { Ad, Bd } = zeroOrderHold(A, B, n, INPUTS, h)
  for (let r = 0; r < n; r++) {
    if (A.subarray(r * n, (r + 1) * n).some((entry) => entry !== 0)) continue
    if (B.subarray(r * INPUTS, (r + 1) * INPUTS).some((entry) => entry !== 0)) continue
    Ad.fill(0, r * n, (r + 1) * n)
    Ad[r * n + r] = 1
    Bd.fill(0, r * INPUTS, (r + 1) * INPUTS)
  }
  return { Ad, Bd }
}

/** ‖D⁻¹AD‖₁ with D from a few sweeps of Parlett and Reinsch's scaling, and the states that only follow shrunk away. */
function balancedNorm(A: Float64Array, n: number): number {
  const d = new Float64Array(n).fill(1)
  for (let sweep = 0; sweep < 20; sweep++) {
    let changed = false
    for (let k = 0; k < n; k++) {
      let column = 0
      let row = 0
      for (let j = 0; j < n; j++) {
        if (j === k) continue
        column += (Math.abs(A[j * n + k]) * d[k]) / d[j]
        row += (Math.abs(A[k * n + j]) * d[j]) / d[k]
      }
      // A state that only drives or only follows can be scaled until it does not count.
      const factor = column === 0 ? (row > 1 ? row : 1) : row === 0 ? (column > 1 ? 1 / column : 1) : Math.sqrt(row / column)
      if (factor !== 1 && column * factor + row / factor < 0.95 * (column + row)) {
        d[k] *= factor
        changed = true
      }
    }
    if (!changed) break
  }
  let norm = 1
  for (let k = 0; k < n; k++) {
    let sum = 0
    for (let j = 0; j < n; j++) sum += (Math.abs(A[j * n + k]) * d[k]) / d[j]
    if (sum > norm) norm = sum
  }
  return norm
}
