import { complexEigenvalues, complexMatrix, solveComplex, type ComplexMatrix } from './complex-matrix.ts'
import type { MarginSource } from './loci.ts'
import { OuterCarrier, outerLayout } from './monodromy.ts'
import type { OuterSteps } from './outer-steps.ts'
import type { SampledJoint } from './sampled-joint.ts'
import { largestSingularValue, singularValueBound } from './singular-value.ts'

/** A q-channel system over one hyperperiod: s⁺ = A·s + B·d, y = C·s + D·d, D lower triangular. */
interface Lift {
  readonly n: number
  readonly A: Float64Array
  readonly B: Float64Array
  readonly C: Float64Array
  readonly D: Float64Array
}

/**
 * A loop over a long hyperperiod, lifted whole: law, window and plant as one state space from the broken signal to itself.
 *
 * Evaluating it costs q²·n, where the product of laws and plant would cost q³; a single locus is followed by Newton's
 * iteration on det(λI − Φ(c)), n × n, without any q × q eigenvalues.
 */
export class LongSource implements MarginSource {
  readonly q: number
  readonly period: number
  readonly landmarks: readonly number[]
  private readonly open: Lift
  private readonly closed: Lift
  private readonly L: ComplexMatrix
  private readonly vector: ComplexMatrix
  private readonly det = { re: 0, im: 0 }

  constructor(joint: SampledJoint, steps: OuterSteps, closure: 'velocity' | 'position', landmarks: readonly number[]) {
    this.q = steps.q
    this.period = joint.timing.T_o
    this.landmarks = landmarks
    this.open = liftLoop(joint, steps, closure, 0)
    this.closed = liftLoop(joint, steps, closure, 1)
    this.L = complexMatrix(this.q)
    this.vector = complexMatrix(this.q, 1)
  }

  evaluate(psi: number, re: Float64Array, im: Float64Array): void {
    this.transfer(this.open, psi)
    complexEigenvalues(this.L, re, im)
  }

  /** L (open) or T (closed) at e^{jψ} into this.L. */
  private transfer(lift: Lift, psi: number): void {
    const { q, L } = this
    const { n, A, B, C, D } = lift
    const M = complexMatrix(n)
    const X = { n, re: B.slice(), im: new Float64Array(n * q) }
    for (let k = 0; k < n * n; k++) M.re[k] = -A[k]
    for (let i = 0; i < n; i++) {
      M.re[i * n + i] += Math.cos(psi)
      M.im[i * n + i] += Math.sin(psi)
    }
    solveComplex(M, X, q, this.det)
    L.re.set(D)
    L.im.fill(0)
    for (let a = 0; a < q; a++) {
      for (let i = 0; i < n; i++) {
        const c = C[a * n + i]
        if (c === 0) continue
        for (let b = 0; b < q; b++) {
          L.re[a * q + b] += c * X.re[i * q + b]
          L.im[a * q + b] += c * X.im[i * q + b]
        }
      }
    }
  }

  /** det(e^{jψ}I − Φ(c)) for the factor c on the broken signal, Φ(c) = A − c·B·(I + c·D)⁻¹·C. */
  private determinant(psi: number, cr: number, ci: number, out: { re: number; im: number }): void {
    const { q } = this
    const { n, A, B, C, D } = this.open
    const Y = { n: q, re: C.slice(), im: new Float64Array(q * n) }
    for (let a = 0; a < q; a++) {
      for (let k = 0; k < a; k++) {
        const fr = cr * D[a * q + k]
        const fi = ci * D[a * q + k]
        if (fr === 0 && fi === 0) continue
        for (let j = 0; j < n; j++) {
          const yr = Y.re[k * n + j]
          const yi = Y.im[k * n + j]
          Y.re[a * n + j] -= fr * yr - fi * yi
          Y.im[a * n + j] -= fr * yi + fi * yr
        }
      }
    }
    const M = complexMatrix(n)
    for (let i = 0; i < n; i++) {
      for (let k = 0; k < q; k++) {
        const b = B[i * q + k]
        if (b === 0) continue
        for (let j = 0; j < n; j++) {
          M.re[i * n + j] += b * (cr * Y.re[k * n + j] - ci * Y.im[k * n + j])
          M.im[i * n + j] += b * (cr * Y.im[k * n + j] + ci * Y.re[k * n + j])
        }
      }
      for (let j = 0; j < n; j++) M.re[i * n + j] -= A[i * n + j]
      M.re[i * n + i] += Math.cos(psi)
      M.im[i * n + i] += Math.sin(psi)
    }
    solveComplex(M, null, 0, out)
  }

  /** The locus at ψ that is nearest to a guess, by the secant method in c = −1/λ; null where it does not settle. */
  follow(psi: number, re: number, im: number): { re: number; im: number } | null {
    const size = re * re + im * im
    if (size === 0) return null
    let ar = -re / size
    let ai = im / size
    let br = ar * (1 + 1e-5)
    let bi = ai * (1 + 1e-5)
    const fa = { re: 0, im: 0 }
    const fb = { re: 0, im: 0 }
    this.determinant(psi, ar, ai, fa)
    for (let step = 0; step < 20; step++) {
      this.determinant(psi, br, bi, fb)
      const dr = fb.re - fa.re
      const di = fb.im - fa.im
      const d = dr * dr + di * di
      if (d === 0) break
      // b − f(b)·(b − a)/(f(b) − f(a))
      const hr = br - ar
      const hi = bi - ai
      const nr = fb.re * hr - fb.im * hi
      const ni = fb.re * hi + fb.im * hr
      const sr = (nr * dr + ni * di) / d
      const si = (ni * dr - nr * di) / d
      ar = br
      ai = bi
      fa.re = fb.re
      fa.im = fb.im
      br -= sr
      bi -= si
      const moved = Math.hypot(sr, si)
      if (!(moved < 0.2 * Math.hypot(br, bi))) return null
      if (moved <= 1e-13 * Math.hypot(br, bi)) break
    }
    const s = br * br + bi * bi
    return { re: -br / s, im: bi / s }
  }

  strongest(psi: number, re: number, im: number): number {
    const { q, L, vector } = this
    const scale = Math.hypot(re, im)
    for (let a = 0; a < q; a++) {
      vector.re[a] = 1 + 0.1 * Math.cos(a)
      vector.im[a] = 0.1 * Math.sin(2 * a)
    }
    for (let step = 0; step < 2; step++) {
      this.transfer(this.open, psi)
      for (let a = 0; a < q; a++) {
        L.re[a * q + a] -= re * (1 + 1e-10) + 1e-14 * scale
        L.im[a * q + a] -= im * (1 + 1e-10)
      }
      solveComplex(L, vector, 1, this.det)
      normalise(vector)
    }
    // The vector is the broken signal at ticks 0…q−1: its component at θ + 2πm/q.
    let best = 0
    let most = -1
    for (let m = 0; m < q; m++) {
      const theta = (psi + 2 * Math.PI * m) / q
      let sr = 0
      let si = 0
      for (let k = 0; k < q; k++) {
        const c = Math.cos(theta * k)
        const s = Math.sin(theta * k)
        sr += vector.re[k] * c + vector.im[k] * s
        si += vector.im[k] * c - vector.re[k] * s
      }
      const size = sr * sr + si * si
      if (size > most) {
        most = size
        best = m
      }
    }
    const theta = (psi + 2 * Math.PI * best) / q
    return theta > Math.PI ? theta - 2 * Math.PI : theta
  }

  sensitivityNorm(psi: number, floor: number): number {
    const { q, L } = this
    this.transfer(this.closed, psi)
    for (let k = 0; k < q * q; k++) {
      L.re[k] = -L.re[k]
      L.im[k] = -L.im[k]
    }
    for (let a = 0; a < q; a++) L.re[a * q + a] += 1
    if (floor > 0 && singularValueBound(L) <= floor) return 0
    return largestSingularValue(L)
  }
}

/**
 * L and T of a loop over a long hyperperiod, fundamental component, from its whole lift: q² where the product costs q³.
 *
 * @source control-model.md §4
 */
export class LongResponse {
  private readonly q: number
  private readonly open: Lift
  private readonly closed: Lift

  constructor(joint: SampledJoint, steps: OuterSteps, closure: 'velocity' | 'position') {
    this.q = steps.q
    this.open = liftLoop(joint, steps, closure, 0)
    this.closed = liftLoop(joint, steps, closure, 1)
  }

  at(theta: number, out: { L_re: number; L_im: number; T_re: number; T_im: number }): void {
    const L = this.through(this.open, theta)
    const T = this.through(this.closed, theta)
    out.L_re = L.re
    out.L_im = L.im
    out.T_re = T.re
    out.T_im = T.im
  }

  /** vᴴ·(D + C(λI − A)⁻¹B)·v/q with v_r = e^{jθr}. */
  private through(lift: Lift, theta: number): { re: number; im: number } {
    const { q } = this
    const { n, A, B, C, D } = lift
    const cosine = Float64Array.from({ length: q }, (_, k) => Math.cos(theta * k))
    const sine = Float64Array.from({ length: q }, (_, k) => Math.sin(theta * k))
    const M = complexMatrix(n)
    const x = complexMatrix(n, 1)
    for (let k = 0; k < n * n; k++) M.re[k] = -A[k]
    for (let i = 0; i < n; i++) {
      M.re[i * n + i] += Math.cos(q * theta)
      M.im[i * n + i] += Math.sin(q * theta)
      for (let k = 0; k < q; k++) {
        x.re[i] += B[i * q + k] * cosine[k]
        x.im[i] += B[i * q + k] * sine[k]
      }
    }
    solveComplex(M, x, 1, { re: 0, im: 0 })
    let re = 0
    let im = 0
    for (let a = 0; a < q; a++) {
      let yr = 0
      let yi = 0
      for (let i = 0; i < n; i++) {
        yr += C[a * n + i] * x.re[i]
        yi += C[a * n + i] * x.im[i]
      }
      for (let k = 0; k <= a; k++) {
        yr += D[a * q + k] * cosine[k]
        yi += D[a * q + k] * sine[k]
      }
      re += cosine[a] * yr + sine[a] * yi
      im += cosine[a] * yi - sine[a] * yr
    }
    return { re: re / q, im: im / q }
  }
}

/** Carries unit states and unit injections through the hyperperiod, to minus the law: L with factor 0 in the broken signal, T with 1. */
function liftLoop(joint: SampledJoint, steps: OuterSteps, closure: 'velocity' | 'position', factor: 0 | 1): Lift {
  const layout = outerLayout(joint, steps, closure)
  const { n } = layout
  const { q } = steps
  const carrier = new OuterCarrier(joint, steps, closure, n + q)
  for (let i = 0; i < n; i++) carrier.setUnit(layout, i)
  const C = new Float64Array(q * n)
  const D = new Float64Array(q * q)
  carrier.prepare = (k, injected) => {
    injected.fill(0)
    injected[n + k] = 1
  }
  carrier.observeLaw = (k, row) => {
    for (let c = 0; c < n; c++) C[k * n + c] = -row[c]
    for (let c = 0; c < q; c++) D[k * q + c] = -row[n + c]
  }
  carrier.run({ re: factor, im: 0 })
  const A = new Float64Array(n * n)
  const B = new Float64Array(n * q)
  carrier.read(layout, (row, values) => {
    for (let c = 0; c < n; c++) A[row * n + c] = values[c]
    for (let c = 0; c < q; c++) B[row * q + c] = values[n + c]
  })
  return { n, A, B, C, D }
}

function squares(x: ComplexMatrix): number {
  let sum = 0
  for (let k = 0; k < x.n; k++) sum += x.re[k] ** 2 + x.im[k] ** 2
  return sum
}

function normalise(x: ComplexMatrix): void {
  let largest = 0
  for (let k = 0; k < x.n; k++) largest = Math.max(largest, Math.abs(x.re[k]), Math.abs(x.im[k]))
  if (largest === 0) return
  for (let k = 0; k < x.n; k++) {
    x.re[k] /= largest
    x.im[k] /= largest
  }
  const scale = 1 / Math.sqrt(squares(x))
  for (let k = 0; k < x.n; k++) {
    x.re[k] *= scale
    x.im[k] *= scale
  }
}
