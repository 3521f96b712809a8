import { NumericError } from './errors.ts'

/** A complex n × n matrix, row by row, real and imaginary parts apart. */
export interface ComplexMatrix {
  readonly n: number
  readonly re: Float64Array
  readonly im: Float64Array
}

export function complexMatrix(n: number, columns = n): ComplexMatrix {
  return { n, re: new Float64Array(n * columns), im: new Float64Array(n * columns) }
}

/**
 * X ← M⁻¹·X by elimination with partial pivoting; M is spoilt.
 *
 * @param X        n × columns
 * @param columns  right-hand sides
 * @returns        det M as mantissa (re, im) — 0 when singular, X then not usable
 */
export function solveComplex(M: ComplexMatrix, X: ComplexMatrix | null, columns: number, det: { re: number; im: number }): void {
  const { n } = M
  const a = M.re
  const b = M.im
  det.re = 1
  det.im = 0
  for (let c = 0; c < n; c++) {
    let pivot = c
    let largest = -1
    for (let r = c; r < n; r++) {
      const size = Math.abs(a[r * n + c]) + Math.abs(b[r * n + c])
      if (size > largest) {
        largest = size
        pivot = r
      }
    }
    if (!(largest > 0)) {
      det.re = 0
      det.im = 0
      return
    }
    if (pivot !== c) {
      swapRows(a, n, pivot, c, c)
      swapRows(b, n, pivot, c, c)
      if (X) {
        swapRows(X.re, columns, pivot, c, 0)
        swapRows(X.im, columns, pivot, c, 0)
      }
      det.re = -det.re
      det.im = -det.im
    }
    const pr = a[c * n + c]
    const pi = b[c * n + c]
    const d = det.re
    det.re = d * pr - det.im * pi
    det.im = d * pi + det.im * pr
    const scale = 1 / (pr * pr + pi * pi)
    const ir = pr * scale
    const ii = -pi * scale
    for (let r = c + 1; r < n; r++) {
      const xr = a[r * n + c]
      const xi = b[r * n + c]
      if (xr === 0 && xi === 0) continue
      const fr = xr * ir - xi * ii
      const fi = xr * ii + xi * ir
      for (let j = c + 1; j < n; j++) {
        const ur = a[c * n + j]
        const ui = b[c * n + j]
        a[r * n + j] -= fr * ur - fi * ui
        b[r * n + j] -= fr * ui + fi * ur
      }
      if (X) {
        for (let j = 0; j < columns; j++) {
          const ur = X.re[c * columns + j]
          const ui = X.im[c * columns + j]
          X.re[r * columns + j] -= fr * ur - fi * ui
          X.im[r * columns + j] -= fr * ui + fi * ur
        }
      }
    }
  }
  if (!X) return
  for (let r = n - 1; r >= 0; r--) {
    const pr = a[r * n + r]
    const pi = b[r * n + r]
    const scale = 1 / (pr * pr + pi * pi)
    for (let j = 0; j < columns; j++) {
      let xr = X.re[r * columns + j]
      let xi = X.im[r * columns + j]
      for (let c = r + 1; c < n; c++) {
        const ur = a[r * n + c]
        const ui = b[r * n + c]
        const yr = X.re[c * columns + j]
        const yi = X.im[c * columns + j]
        xr -= ur * yr - ui * yi
        xi -= ur * yi + ui * yr
      }
      X.re[r * columns + j] = (xr * pr + xi * pi) * scale
      X.im[r * columns + j] = (xi * pr - xr * pi) * scale
    }
  }
}

function swapRows(m: Float64Array, columns: number, i: number, j: number, from: number): void {
  for (let c = from; c < columns; c++) {
    const t = m[i * columns + c]
    m[i * columns + c] = m[j * columns + c]
    m[j * columns + c] = t
  }
}

const SWEEPS = 60

/**
 * Eigenvalues of a complex matrix, which is spoilt: balancing, Hessenberg form by elimination, single-shift QR with Givens rotations.
 *
 * @throws NumericError no-convergence
 * @accuracy 1e-12 of the norm against det and trace (complex-matrix.test.ts)
 */
export function complexEigenvalues(M: ComplexMatrix, outRe: Float64Array, outIm: Float64Array): void {
  const { n, re, im } = M
  if (n === 1) {
    outRe[0] = re[0]
    outIm[0] = im[0]
    return
  }
  balanceComplex(M)
  if (n > 2) toComplexHessenberg(M)
  let high = n - 1
  let sweeps = 0
  while (high >= 0) {
    let low = high
    for (; low > 0; low--) {
      const at = low * n + low
      const s = Math.abs(re[at]) + Math.abs(im[at]) + Math.abs(re[at - n - 1]) + Math.abs(im[at - n - 1])
      if (Math.abs(re[at - 1]) + Math.abs(im[at - 1]) <= 2.3e-16 * s) {
        re[at - 1] = 0
        im[at - 1] = 0
        break
      }
    }
    if (low === high) {
      outRe[high] = re[high * n + high]
      outIm[high] = im[high * n + high]
      high--
      sweeps = 0
      continue
    }
    if (low === high - 1) {
      wilkinsonShift(re, im, n, high)
      outRe[high] = shift.re
      outIm[high] = shift.im
      outRe[low] = shift.otherRe
      outIm[low] = shift.otherIm
      high -= 2
      sweeps = 0
      continue
    }
    if (sweeps === SWEEPS) throw new NumericError('no-convergence', { limit: SWEEPS, text: `A locus eigenvalue did not converge in ${SWEEPS} sweeps; the margin was not computed.` })
    sweeps++
    shiftedSweep(M, low, high, sweeps % 10 === 0)
  }
}

/** Eigenvalues of the trailing 2 × 2 block, the one nearer to its last entry first: that is the shift; kept here so that no object is made in the inner loop. */
const shift = { re: 0, im: 0, otherRe: 0, otherIm: 0 }

function wilkinsonShift(re: Float64Array, im: Float64Array, n: number, high: number): void {
  const at = high * n + high
  const dr = re[at]
  const di = im[at]
  // Half the difference of the diagonal, h; b·c of the trailing 2 × 2 block.
  const hr = (re[at - n - 1] - dr) / 2
  const hi = (im[at - n - 1] - di) / 2
  const bcr = re[at - n] * re[at - 1] - im[at - n] * im[at - 1]
  const bci = re[at - n] * im[at - 1] + im[at - n] * re[at - 1]
  const qr = hr * hr - hi * hi + bcr
  const qi = 2 * hr * hi + bci
  const modulus = Math.sqrt(qr * qr + qi * qi)
  let rr = Math.sqrt((modulus + Math.abs(qr)) / 2)
  let ri = rr === 0 ? 0 : qi / (2 * rr)
  if (qr < 0) {
    const t = rr
    rr = Math.abs(ri)
    ri = qi >= 0 ? t : -t
  }
  if (hr * rr + hi * ri < 0) {
    rr = -rr
    ri = -ri
  }
  const sr = hr + rr
  const si = hi + ri
  const d = sr * sr + si * si
  // bc/(h ± root) is what the off-diagonal entries take from one and give to the other.
  const mr = d > 0 ? (bcr * sr + bci * si) / d : 0
  const mi = d > 0 ? (bci * sr - bcr * si) / d : 0
  shift.re = dr - mr
  shift.im = di - mi
  shift.otherRe = re[at - n - 1] + mr
  shift.otherIm = im[at - n - 1] + mi
}

let rotations = new Float64Array(0)

function shiftedSweep(M: ComplexMatrix, low: number, high: number, exceptional: boolean): void {
  const { n, re, im } = M
  const end = high * n + high
  if (exceptional) {
    shift.re = re[end] + Math.abs(re[end - 1]) + Math.abs(im[end - 1])
    shift.im = im[end]
  } else {
    wilkinsonShift(re, im, n, high)
  }
  const sr = shift.re
  const si = shift.im
  if (rotations.length < 3 * n) rotations = new Float64Array(3 * n)
  for (let i = low; i <= high; i++) {
    re[i * n + i] -= sr
    im[i * n + i] -= si
  }
  for (let k = low; k < high; k++) {
    const at = k * n + k
    const xr = re[at]
    const xi = im[at]
    const yr = re[at + n]
    const yi = im[at + n]
    const xx = xr * xr + xi * xi
    const yy = yr * yr + yi * yi
    let c = 1
    let gr = 0
    let gi = 0
    if (yy > 0) {
      if (xx === 0) {
        const ym = Math.sqrt(yy)
        c = 0
        gr = yr / ym
        gi = -yi / ym
        re[at] = ym
        im[at] = 0
      } else {
        const r = Math.sqrt(xx + yy)
        const xm = Math.sqrt(xx)
        c = xm / r
        const f = 1 / (xm * r)
        // s = x·ȳ/(|x|·r)
        gr = (xr * yr + xi * yi) * f
        gi = (xi * yr - xr * yi) * f
        const g = r / xm
        re[at] = xr * g
        im[at] = xi * g
      }
    }
    re[at + n] = 0
    im[at + n] = 0
    rotations[3 * k] = c
    rotations[3 * k + 1] = gr
    rotations[3 * k + 2] = gi
    for (let j = k + 1; j <= high; j++) {
      const u = k * n + j
      const v = u + n
      const ur = re[u]
      const ui = im[u]
      const vr = re[v]
      const vi = im[v]
      re[u] = c * ur + gr * vr - gi * vi
      im[u] = c * ui + gr * vi + gi * vr
      re[v] = c * vr - gr * ur - gi * ui
      im[v] = c * vi - gr * ui + gi * ur
    }
  }
  for (let k = low; k < high; k++) {
    const c = rotations[3 * k]
    const gr = rotations[3 * k + 1]
    const gi = rotations[3 * k + 2]
    for (let i = low; i <= k + 1; i++) {
      const u = i * n + k
      const v = u + 1
      const ur = re[u]
      const ui = im[u]
      const vr = re[v]
      const vi = im[v]
      re[u] = c * ur + gr * vr + gi * vi
      im[u] = c * ui + gr * vi - gi * vr
      re[v] = c * vr - gr * ur + gi * ui
      im[v] = c * vi - gr * ui - gi * ur
    }
  }
  for (let i = low; i <= high; i++) {
    re[i * n + i] += sr
    im[i * n + i] += si
  }
}

function balanceComplex(M: ComplexMatrix): void {
  const { n, re, im } = M
  for (let sweep = 0; sweep < 12; sweep++) {
    let settled = true
    for (let i = 0; i < n; i++) {
      let row = 0
      let column = 0
      for (let j = 0; j < n; j++) {
        if (j === i) continue
        row += Math.abs(re[i * n + j]) + Math.abs(im[i * n + j])
        column += Math.abs(re[j * n + i]) + Math.abs(im[j * n + i])
      }
      if (row === 0 || column === 0) continue
      if (row < 4 * column && column < 4 * row) continue
      const total = row + column
      const exponent = Math.max(-300, Math.min(300, Math.round(0.5 * Math.log2(row / column))))
      if (exponent === 0) continue
      const f = 2 ** exponent
      if (column * f + row / f >= 0.95 * total) continue
      settled = false
      const g = 1 / f
      for (let j = 0; j < n; j++) {
        re[i * n + j] *= g
        im[i * n + j] *= g
        re[j * n + i] *= f
        im[j * n + i] *= f
      }
    }
    if (settled) return
  }
}

function toComplexHessenberg(M: ComplexMatrix): void {
  const { n, re, im } = M
  for (let m = 1; m < n - 1; m++) {
    let pivot = m
    let largest = 0
    for (let i = m; i < n; i++) {
      const size = Math.abs(re[i * n + m - 1]) + Math.abs(im[i * n + m - 1])
      if (size > largest) {
        largest = size
        pivot = i
      }
    }
    if (largest === 0) continue
    if (pivot !== m) {
      swapRows(re, n, pivot, m, m - 1)
      swapRows(im, n, pivot, m, m - 1)
      for (let i = 0; i < n; i++) {
        let t = re[i * n + pivot]
        re[i * n + pivot] = re[i * n + m]
        re[i * n + m] = t
        t = im[i * n + pivot]
        im[i * n + pivot] = im[i * n + m]
        im[i * n + m] = t
      }
    }
    const xr = re[m * n + m - 1]
    const xi = im[m * n + m - 1]
    const d = 1 / (xr * xr + xi * xi)
    for (let i = m + 1; i < n; i++) {
      const ar = re[i * n + m - 1]
      const ai = im[i * n + m - 1]
      if (ar === 0 && ai === 0) continue
      const yr = (ar * xr + ai * xi) * d
      const yi = (ai * xr - ar * xi) * d
      re[i * n + m - 1] = 0
      im[i * n + m - 1] = 0
      for (let j = m; j < n; j++) {
        const ur = re[m * n + j]
        const ui = im[m * n + j]
        re[i * n + j] -= yr * ur - yi * ui
        im[i * n + j] -= yr * ui + yi * ur
      }
      for (let r = 0; r < n; r++) {
        const ur = re[r * n + i]
        const ui = im[r * n + i]
        re[r * n + m] += yr * ur - yi * ui
        im[r * n + m] += yr * ui + yi * ur
      }
    }
  }
}
