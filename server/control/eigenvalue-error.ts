import { complexMatrix, solveComplex, type ComplexMatrix } from './complex-matrix.ts'
import { balance } from './eigenvalues.ts'

/**
 * Estimated error of one computed eigenvalue: unit rounding × n × norm of the balanced matrix × condition of the eigenvalue.
 *
 * The condition 1/|yᴴx| comes from right and left vectors by inverse iteration.
 *
 * @param A  n × n, row by row   @param re, im  the eigenvalue
 * @returns  an absolute error; Infinity where no vectors were found (a defective eigenvalue)
 * @source   J. H. Wilkinson, The Algebraic Eigenvalue Problem, 1965, from memory
 */
export function eigenvalueError(A: Float64Array, n: number, re: number, im: number): number {
  const B = A.slice()
  balance(B, n, new Float64Array(n))
  let norm = 0
  for (let i = 0; i < n; i++) {
    let row = 0
    for (let j = 0; j < n; j++) row += Math.abs(B[i * n + j])
    norm = Math.max(norm, row)
  }
  const x = inverseIteration(B, n, re, im, norm, false)
  const y = inverseIteration(B, n, re, im, norm, true)
  let sr = 0
  let si = 0
  for (let k = 0; k < n; k++) {
    // The transposed system's vector is the conjugate of y: a plain product.
    sr += x.re[k] * y.re[k] - x.im[k] * y.im[k]
    si += x.re[k] * y.im[k] + x.im[k] * y.re[k]
  }
  const cosine = Math.hypot(sr, si)
  return cosine > 0 ? (n * 2.2e-16 * norm) / cosine : Infinity
}

function inverseIteration(B: Float64Array, n: number, re: number, im: number, norm: number, transposed: boolean): ComplexMatrix {
  const M = complexMatrix(n)
  const x = complexMatrix(n, 1)
  const det = { re: 0, im: 0 }
  const offset = 1e-13 * (norm || 1)
  for (let k = 0; k < n; k++) x.re[k] = 1 + 0.1 * Math.cos(k)
  for (let step = 0; step < 3; step++) {
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        M.re[i * n + j] = transposed ? B[j * n + i] : B[i * n + j]
        M.im[i * n + j] = 0
      }
      M.re[i * n + i] -= re + offset
      M.im[i * n + i] -= im
    }
    solveComplex(M, x, 1, det)
    let largest = 0
    for (let k = 0; k < n; k++) largest = Math.max(largest, Math.abs(x.re[k]), Math.abs(x.im[k]))
    let sum = 0
    for (let k = 0; k < n; k++) {
      x.re[k] /= largest
      x.im[k] /= largest
      sum += x.re[k] ** 2 + x.im[k] ** 2
    }
    const scale = 1 / Math.sqrt(sum)
    for (let k = 0; k < n; k++) {
      x.re[k] *= scale
      x.im[k] *= scale
    }
  }
  return x
}
