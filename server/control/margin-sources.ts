import { complexEigenvalues, complexMatrix, solveComplex, type ComplexMatrix } from './complex-matrix.ts'
import { CurrentTransfer } from './current-transfer.ts'
import type { LiftedPlant } from './lifted-plant.ts'
import type { MarginSource } from './margins.ts'
import { invertSensitivity, OuterTransfer } from './outer-transfer.ts'
import type { SampledJoint } from './sampled-joint.ts'

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

/** Up to this size the norm comes from the eigenvalues of SᴴS, above it from power iteration. */
const DIRECT_NORM = 12

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
  private readonly image: ComplexMatrix
  private readonly det = { re: 0, im: 0 }
  private readonly gramRe: Float64Array
  private readonly gramIm: Float64Array

  constructor(joint: SampledJoint, plant: LiftedPlant, closure: 'velocity' | 'position', landmarks: readonly number[] = [], transfer = new OuterTransfer(joint, plant)) {
    this.q = plant.q
    this.period = joint.timing.T_o
    this.closure = closure
    this.transfer = transfer
    this.L = complexMatrix(this.q)
    this.S = complexMatrix(this.q)
    this.vector = complexMatrix(this.q, 1)
    this.image = complexMatrix(this.q, 1)
    this.gramRe = new Float64Array(this.q)
    this.gramIm = new Float64Array(this.q)
    this.landmarks = [...landmarks, ...windowLobes(joint, this.q)]
  }

  evaluate(psi: number, re: Float64Array, im: Float64Array): void {
    this.transfer.at(psi / this.q)
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
    const { q, L, S, vector, image } = this
    this.transfer.at(psi / q)
    this.transfer.loop(this.closure, L)
    invertSensitivity(L, S, this.det)
    if (floor > 0 && normBound(S) <= floor) return 0
    if (q <= DIRECT_NORM) {
      gram(S, L)
      complexEigenvalues(L, this.gramRe, this.gramIm)
      return Math.sqrt(Math.max(...this.gramRe))
    }
    // Power iteration on SᴴS: the value converges with the square of the vector.
    for (let a = 0; a < q; a++) {
      vector.re[a] = 1 + 0.1 * Math.cos(a)
      vector.im[a] = 0.1 * Math.sin(2 * a)
    }
    normalise(vector)
    let sigma = 0
    for (let step = 0; step < 200; step++) {
      multiply(S, vector, image)
      const next = norm(image)
      multiplyAdjoint(S, image, vector)
      normalise(vector)
      if (Math.abs(next - sigma) <= 1e-10 * next) return next
      sigma = next
    }
    return sigma
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

/** √(‖S‖₁·‖S‖∞), never below the largest singular value. */
function normBound(S: ComplexMatrix): number {
  const { n, re, im } = S
  let rows = 0
  let columns = 0
  for (let i = 0; i < n; i++) {
    let row = 0
    let column = 0
    for (let j = 0; j < n; j++) {
      row += Math.sqrt(re[i * n + j] ** 2 + im[i * n + j] ** 2)
      column += Math.sqrt(re[j * n + i] ** 2 + im[j * n + i] ** 2)
    }
    rows = Math.max(rows, row)
    columns = Math.max(columns, column)
  }
  return Math.sqrt(rows * columns)
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

function norm(x: ComplexMatrix): number {
  let sum = 0
  for (let k = 0; k < x.n; k++) sum += x.re[k] ** 2 + x.im[k] ** 2
  return Math.sqrt(sum)
}

/** out ← SᴴS. */
function gram(S: ComplexMatrix, out: ComplexMatrix): void {
  const { n, re, im } = S
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let sr = 0
      let si = 0
      for (let k = 0; k < n; k++) {
        const ar = re[k * n + i]
        const ai = im[k * n + i]
        const br = re[k * n + j]
        const bi = im[k * n + j]
        sr += ar * br + ai * bi
        si += ar * bi - ai * br
      }
      out.re[i * n + j] = sr
      out.im[i * n + j] = si
    }
  }
}

function multiply(M: ComplexMatrix, x: ComplexMatrix, y: ComplexMatrix): void {
  const { n } = M
  for (let i = 0; i < n; i++) {
    let sr = 0
    let si = 0
    for (let k = 0; k < n; k++) {
      sr += M.re[i * n + k] * x.re[k] - M.im[i * n + k] * x.im[k]
      si += M.re[i * n + k] * x.im[k] + M.im[i * n + k] * x.re[k]
    }
    y.re[i] = sr
    y.im[i] = si
  }
}

function multiplyAdjoint(M: ComplexMatrix, x: ComplexMatrix, y: ComplexMatrix): void {
  const { n } = M
  for (let i = 0; i < n; i++) {
    let sr = 0
    let si = 0
    for (let k = 0; k < n; k++) {
      sr += M.re[k * n + i] * x.re[k] + M.im[k * n + i] * x.im[k]
      si += M.re[k * n + i] * x.im[k] - M.im[k * n + i] * x.re[k]
    }
    y.re[i] = sr
    y.im[i] = si
  }
}
