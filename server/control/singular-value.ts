import { complexEigenvalues, complexMatrix, type ComplexMatrix } from './complex-matrix.ts'
import { eigenvalues } from './eigenvalues.ts'

/** Up to this order the eigenvalues of SᴴS are computed outright. */
const DIRECT = 12
/** Lanczos steps beyond: the top of the spectrum settles long before. */
const STEPS = 24

/**
 * Largest singular value of a square complex matrix.
 *
 * Small ones from all eigenvalues of SᴴS; larger ones from a Lanczos process on it, whose largest value approaches from below.
 *
 * @accuracy 1e-7 relative against all eigenvalues of SᴴS (singular-value.test.ts)
 * @source   Golub and Van Loan, Matrix Computations, ch. 10, from memory
 */
export function largestSingularValue(S: ComplexMatrix): number {
  return S.n <= DIRECT ? direct(S) : lanczos(S)
}

/** √(‖S‖₁·‖S‖∞), never below the largest singular value. */
export function singularValueBound(S: ComplexMatrix): number {
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

function direct(S: ComplexMatrix): number {
  const { n, re, im } = S
  const M = complexMatrix(n)
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
      M.re[i * n + j] = sr
      M.im[i * n + j] = si
    }
  }
  const outRe = new Float64Array(n)
  complexEigenvalues(M, outRe, new Float64Array(n))
  return Math.sqrt(Math.max(0, ...outRe))
}

function lanczos(S: ComplexMatrix): number {
  const { n } = S
  const steps = Math.min(STEPS, n)
  let x = complexMatrix(n, 1)
  let before = complexMatrix(n, 1)
  const image = complexMatrix(n, 1)
  const next = complexMatrix(n, 1)
  for (let k = 0; k < n; k++) {
    // A start that leans on no component.
    x.re[k] = 1 + 0.3 * Math.cos(1.7 * k)
    x.im[k] = 0.5 * Math.sin(2.9 * k)
  }
  scale(x, 1 / Math.sqrt(squares(x)))
  const T = new Float64Array(steps * steps)
  let beta = 0
  let used = 0
  for (let step = 0; step < steps; step++) {
    times(S, x, image)
    const alpha = squares(image)
    timesAdjoint(S, image, next)
    T[step * steps + step] = alpha
    used = step + 1
    for (let k = 0; k < n; k++) {
      next.re[k] -= alpha * x.re[k] + beta * before.re[k]
      next.im[k] -= alpha * x.im[k] + beta * before.im[k]
    }
    beta = Math.sqrt(squares(next))
    if (step === steps - 1 || beta <= 1e-12 * alpha) break
    T[step * steps + step + 1] = beta
    T[(step + 1) * steps + step] = beta
    const t = before
    before = x
    x = t
    for (let k = 0; k < n; k++) {
      x.re[k] = next.re[k] / beta
      x.im[k] = next.im[k] / beta
    }
  }
  const compact = new Float64Array(used * used)
  for (let i = 0; i < used; i++) for (let j = 0; j < used; j++) compact[i * used + j] = T[i * steps + j]
  return Math.sqrt(Math.max(0, ...eigenvalues(compact, used).re))
}

function scale(x: ComplexMatrix, f: number): void {
  for (let k = 0; k < x.n; k++) {
    x.re[k] *= f
    x.im[k] *= f
  }
}

function squares(x: ComplexMatrix): number {
  let sum = 0
  for (let k = 0; k < x.n; k++) sum += x.re[k] ** 2 + x.im[k] ** 2
  return sum
}

function times(M: ComplexMatrix, x: ComplexMatrix, y: ComplexMatrix): void {
  const { n, re, im } = M
  for (let i = 0; i < n; i++) {
    let sr = 0
    let si = 0
    for (let k = 0; k < n; k++) {
      sr += re[i * n + k] * x.re[k] - im[i * n + k] * x.im[k]
      si += re[i * n + k] * x.im[k] + im[i * n + k] * x.re[k]
    }
    y.re[i] = sr
    y.im[i] = si
  }
}

function timesAdjoint(M: ComplexMatrix, x: ComplexMatrix, y: ComplexMatrix): void {
  const { n, re, im } = M
  y.re.fill(0)
  y.im.fill(0)
  for (let k = 0; k < n; k++) {
    const xr = x.re[k]
    const xi = x.im[k]
    for (let i = 0; i < n; i++) {
      y.re[i] += re[k * n + i] * xr + im[k * n + i] * xi
      y.im[i] += re[k * n + i] * xi - im[k * n + i] * xr
    }
  }
}
