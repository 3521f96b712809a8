import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { complexEigenvalues, complexMatrix, solveComplex } from '../../server/control/complex-matrix.ts'
import { eigenvalueError } from '../../server/control/eigenvalue-error.ts'
import { eigenvalues, spectralRadius } from '../../server/control/eigenvalues.ts'
import { NumericError } from '../../server/control/errors.ts'
import { matrixProduct } from '../../server/control/matrix-power.ts'

/** Entries with up to six digits, spread over some decades: no joint has the subnormal numbers that a double's generator likes. */
const unit = fc.integer({ min: -1e6, max: 1e6 }).map((x) => x / 1e6)
const matrix = (n: number, spread: number): fc.Arbitrary<Float64Array> =>
  fc.array(fc.tuple(unit, unit), { minLength: n * n, maxLength: n * n }).map((values) => Float64Array.from(values, ([x, e]) => x * 10 ** (spread * e)))

/** |det(A − λI)| against the product of its pivots' sizes without cancellation: the residual of an eigenvalue. */
function residual(A: Float64Array, n: number, re: number, im: number): number {
  const M = complexMatrix(n)
  M.re.set(A)
  for (let i = 0; i < n; i++) {
    M.re[i * n + i] -= re
    M.im[i * n + i] -= im
  }
  const det = { re: 0, im: 0 }
  const x = complexMatrix(n, 1)
  x.re.fill(1)
  solveComplex(M, x, 1, det)
  if (det.re === 0 && det.im === 0) return 0
  let largest = 0
  for (let k = 0; k < n; k++) largest = Math.max(largest, Math.hypot(x.re[k], x.im[k]))
  // The solution of a system that is singular to rounding is as large as the residual's inverse.
  return 1 / largest
}

describe('real eigenvalues', () => {
  it.each([2, 5, 9, 24])('leave a residual at rounding on random and graded matrices of order %i', (n) => {
    fc.assert(
      fc.property(matrix(n, 3), (A) => {
        const { re, im } = eigenvalues(A, n)
        const size = Math.max(...A.map(Math.abs)) * n
        for (let k = 0; k < n; k++) expect(residual(A, n, re[k], im[k])).toBeLessThanOrEqual(1e-9 * size)
        const trace = Array.from({ length: n }, (_, i) => A[i * n + i]).reduce((a, b) => a + b, 0)
        expect(Math.abs(re.reduce((a, b) => a + b, 0) - trace)).toBeLessThanOrEqual(1e-12 * size)
      }),
      { seed: 21, numRuns: 40 },
    )
  })

  it('agree with the complex route', () => {
    fc.assert(
      fc.property(matrix(8, 1), (A) => {
        const { re, im } = eigenvalues(A, 8)
        const M = complexMatrix(8)
        M.re.set(A)
        const cr = new Float64Array(8)
        const ci = new Float64Array(8)
        complexEigenvalues(M, cr, ci)
        expect(Math.abs(spectralRadius(re, im, 8) / spectralRadius(cr, ci, 8) - 1)).toBeLessThanOrEqual(1e-9)
      }),
      { seed: 5, numRuns: 100 },
    )
  })

  it('find a defective eigenvalue and say how badly it is known', () => {
    const J = Float64Array.of(0.5, 1, 0, 0, 0.5, 1, 0, 0, 0.5)
    const { re, im } = eigenvalues(J, 3)
    expect(spectralRadius(re, im, 3)).toBeCloseTo(0.5, 4)
    expect(eigenvalueError(J, 3, re[0], im[0])).toBeGreaterThan(1e-9)
    const D = Float64Array.of(0.5, 0, 0, 0, 0.3, 0, 0, 0, 0.1)
    expect(eigenvalueError(D, 3, 0.5, 0)).toBeLessThan(1e-14)
  })

  it('are those of a shift register: all on one circle', () => {
    for (const n of [3, 17, 64]) {
      const S = new Float64Array(n * n)
      for (let k = 1; k < n; k++) S[k * n + k - 1] = 1
      S[n - 1] = 0.5
      const { re, im } = eigenvalues(S, n)
      for (let k = 0; k < n; k++) expect(Math.hypot(re[k], im[k])).toBeCloseTo(0.5 ** (1 / n), 10)
    }
  })

  it('refuse NaN and Infinity at once, naming the entry', () => {
    for (const bad of [NaN, Infinity]) {
      const A = new Float64Array(9)
      A[5] = bad
      try {
        eigenvalues(A, 3)
        expect.unreachable()
      } catch (error) {
        expect(error).toBeInstanceOf(NumericError)
        expect((error as NumericError).details.field).toBe('entry 1,2')
      }
    }
  })
})

describe('complex solving', () => {
  it('inverts: M·(M⁻¹·x) = x', () => {
    fc.assert(
      fc.property(matrix(5, 1), matrix(5, 1), (re, im) => {
        const M = { n: 5, re: re.slice(), im: im.slice() }
        const X = complexMatrix(5)
        for (let i = 0; i < 5; i++) X.re[6 * i] = 1
        const det = { re: 0, im: 0 }
        solveComplex(M, X, 5, det)
        if (Math.hypot(det.re, det.im) < 1e-6) return
        const rr = matrixProduct(re, X.re, 5)
        const ii = matrixProduct(im, X.im, 5)
        const size = Math.max(...X.re.map(Math.abs), ...X.im.map(Math.abs)) * 10
        for (let k = 0; k < 25; k++) expect(Math.abs(rr[k] - ii[k] - (k % 6 === 0 ? 1 : 0))).toBeLessThanOrEqual(1e-12 * size)
      }),
      { seed: 8, numRuns: 60 },
    )
  })

  it('tells a singular matrix by determinant 0', () => {
    const det = { re: 1, im: 1 }
    solveComplex({ n: 2, re: Float64Array.of(0, 0, 0, 0), im: new Float64Array(4) }, null, 0, det)
    expect(det).toEqual({ re: 0, im: 0 })
  })
})
