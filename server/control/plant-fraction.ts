import { balance } from './eigenvalues.ts'
import type { LiftedPlant } from './lifted-plant.ts'

/**
 * A lifted plant as a fraction: P(λ) = (Σ N_k·λ^k)/χ(λ), N_k of q × q, k = 0…n, and χ the characteristic polynomial of its A.
 *
 * @source Faddeev and Leverrier's recursion, from memory
 */
export class PlantFraction {
  /** N_k row by row, k after k. */
  readonly numerators: Float64Array
  /** χ_k of λ^k, χ_n = 1. */
  readonly chi: Float64Array
  // The plant's A, B and C on the balanced scale.
  private readonly A: Float64Array
  private readonly B: Float64Array
  private readonly C: Float64Array
  private readonly q: number
  private readonly n: number
  private readonly scale: Float64Array
  private readonly R: Float64Array
  private readonly AR: Float64Array
  private readonly V: Float64Array
  private readonly AV: Float64Array

  constructor(q: number, n: number) {
    this.q = q
    this.n = n
    this.numerators = new Float64Array((n + 1) * q * q)
    this.chi = new Float64Array(n + 1)
    this.A = new Float64Array(n * n)
    this.B = new Float64Array(n * q)
    this.C = new Float64Array(q * n)
    this.scale = new Float64Array(n)
    this.R = new Float64Array(n * n)
    this.AR = new Float64Array(n * n)
    this.V = new Float64Array(n * q)
    this.AV = new Float64Array(n * q)
  }

  /** Takes a plant: Faddeev and Leverrier's recursion on the balanced matrix. */
  take(lifted: LiftedPlant): void {
    const { n, q, A, B, C, R, AR, V, AV, chi, scale } = this
    A.set(lifted.A)
    balance(A, n, scale)
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < q; j++) {
        B[i * q + j] = lifted.B[i * q + j] / scale[i]
        C[j * n + i] = lifted.C[j * n + i] * scale[i]
      }
    }
    R.fill(0)
    for (let i = 0; i < n; i++) R[i * n + i] = 1
    V.set(B)
    chi[n] = 1
    this.addNumerator(lifted.D, n, null)
    for (let k = n - 1; k >= 0; k--) {
      let trace = 0
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) {
          let sum = 0
          for (let l = 0; l < n; l++) sum += A[i * n + l] * R[l * n + j]
          AR[i * n + j] = sum
        }
        trace += AR[i * n + i]
      }
      const c = -trace / (n - k)
      chi[k] = c
      this.addNumerator(lifted.D, k, V)
      if (k === 0) break
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) R[i * n + j] = AR[i * n + j]
        R[i * n + i] += c
      }
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < q; j++) {
          let sum = c * B[i * q + j]
          for (let l = 0; l < n; l++) sum += A[i * n + l] * V[l * q + j]
          AV[i * q + j] = sum
        }
      }
      V.set(AV)
    }
  }

  /** N_k = C·V + χ_k·D. */
  private addNumerator(D: Float64Array, k: number, V: Float64Array | null): void {
    const { q, n, C, chi, numerators } = this
    const at = k * q * q
    for (let a = 0; a < q; a++) {
      for (let b = 0; b < q; b++) {
        let sum = chi[k] * D[a * q + b]
        if (V) for (let i = 0; i < n; i++) sum += C[a * n + i] * V[i * q + b]
        numerators[at + a * q + b] = sum
      }
    }
  }
}
