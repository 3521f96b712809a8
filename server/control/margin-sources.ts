import { complexEigenvalues, complexMatrix, solveComplex, type ComplexMatrix } from './complex-matrix.ts'
import { CurrentTransfer } from './current-transfer.ts'
import type { LiftedPlant } from './lifted-plant.ts'
import type { MarginSource } from './loci.ts'
import { invertSensitivity, OuterTransfer } from './outer-transfer.ts'
import type { SampledJoint } from './sampled-joint.ts'
import { largestSingularValue, singularValueBound } from './singular-value.ts'

/** The current loop as a source of margins; ψ in radians per current tick. */
export function currentSource(joint: SampledJoint, transfer = new CurrentTransfer(joint), landmarks: readonly number[] = []): MarginSource {
  return {
    q: 1,
    period: joint.timing.T_c,
    landmarks,
    evaluate(psi, re, im) {
      transfer.at(psi)
      re[0] = transfer.L_re
      im[0] = transfer.L_im
    },
    strongest: (psi) => psi,
    sensitivityNorm(psi) {
      transfer.at(psi)
      return 1 / Math.hypot(1 + transfer.L_re, transfer.L_im)
    },
  }
}

/** The velocity or position loop as a source of margins; ψ in radians per hyperperiod. */
export class OuterSource implements MarginSource {
  readonly q: number
  readonly period: number
  readonly landmarks: readonly number[]
  private readonly transfer: OuterTransfer
  private readonly closure: 'velocity' | 'position'
  private readonly L: ComplexMatrix
  private readonly S: ComplexMatrix
  private readonly vector: ComplexMatrix
  private readonly det = { re: 0, im: 0 }

  constructor(joint: SampledJoint, plant: LiftedPlant, closure: 'velocity' | 'position', landmarks: readonly number[] = [], transfer = new OuterTransfer(joint, plant)) {
    this.q = plant.q
    this.period = joint.timing.T_o
    this.closure = closure
    this.transfer = transfer
    this.L = complexMatrix(this.q)
    this.S = complexMatrix(this.q)
    this.vector = complexMatrix(this.q, 1)
    this.landmarks = [...landmarks, ...windowLobes(joint, this.q)]
  }

  evaluate(psi: number, re: Float64Array, im: Float64Array): void {
    this.transfer.atAgain(psi / this.q)
    this.transfer.loop(this.closure, this.L)
    complexEigenvalues(this.L, re, im)
  }

  strongest(psi: number, re: number, im: number): number {
    const { q, L, vector } = this
    if (q === 1) return psi
    this.transfer.at(psi / q)
    this.transfer.loop(this.closure, L)
    // Inverse iteration at a shift beside λ; the start leans on no component.
    const scale = Math.hypot(re, im)
    for (let a = 0; a < q; a++) {
      L.re[a * q + a] -= re * (1 + 1e-10) + 1e-14 * scale
      L.im[a * q + a] -= im * (1 + 1e-10)
      vector.re[a] = 1 + 0.1 * Math.cos(a)
      vector.im[a] = 0.1 * Math.sin(2 * a)
    }
    this.S.re.set(L.re)
    this.S.im.set(L.im)
    for (let step = 0; step < 3; step++) {
      L.re.set(this.S.re)
      L.im.set(this.S.im)
      solveComplex(L, vector, 1, this.det)
      normalise(vector)
    }
    let best = 0
    for (let m = 1; m < q; m++) {
      const size = vector.re[m] ** 2 + vector.im[m] ** 2
      if (size > vector.re[best] ** 2 + vector.im[best] ** 2) best = m
    }
    const theta = (psi + 2 * Math.PI * best) / q
    return theta > Math.PI ? theta - 2 * Math.PI : theta
  }

  sensitivityNorm(psi: number, floor: number): number {
    const { q, L, S } = this
    this.transfer.atAgain(psi / q)
    this.transfer.loop(this.closure, L)
    invertSensitivity(L, S, this.det)
    if (floor > 0 && singularValueBound(S) <= floor) return 0
    return largestSingularValue(S)
  }
}

/** The lobes of the window's transfer lie 2π/W apart; their zeros and tops are landmarks, folded into one period. */
function windowLobes(joint: SampledJoint, q: number): number[] {
  const { W } = joint.model.firmware
  const marks = new Set<number>()
  for (let k = 1; k <= W; k++) {
    const folded = (q * Math.PI * k) / W % (2 * Math.PI)
    const psi = folded > Math.PI ? 2 * Math.PI - folded : folded
    if (psi > 1e-6 && psi < Math.PI) marks.add(psi)
  }
  return [...marks]
}

function normalise(x: ComplexMatrix): void {
  let largest = 0
  for (let k = 0; k < x.n; k++) largest = Math.max(largest, Math.abs(x.re[k]), Math.abs(x.im[k]))
  if (largest === 0) return
  let sum = 0
  for (let k = 0; k < x.n; k++) {
    x.re[k] /= largest
    x.im[k] /= largest
    sum += x.re[k] ** 2 + x.im[k] ** 2
  }
  const scale = 1 / Math.sqrt(sum)
  for (let k = 0; k < x.n; k++) {
    x.re[k] *= scale
    x.im[k] *= scale
  }
}
