import { NumericError } from './errors.ts'

/** QR sweeps allowed for each eigenvalue; ten times what any matrix met so far has needed. */
const SWEEPS_PER_EIGENVALUE = 60

export interface EigenvalueWorkspace {
  readonly n: number
  readonly H: Float64Array
  readonly re: Float64Array
  readonly im: Float64Array
  readonly scale: Float64Array
}

export function eigenvalueWorkspace(n: number): EigenvalueWorkspace {
  return { n, H: new Float64Array(n * n), re: new Float64Array(n), im: new Float64Array(n), scale: new Float64Array(n) }
}

/**
 * Eigenvalues of a real matrix.
 *
 * Balances by powers of 2, reduces to Hessenberg form by elimination with pivoting, then Francis double-shift QR with deflation.
 *
 * @param A     n × n, row by row; not changed
 * @param work  of the same n; receives re and im
 * @throws      NumericError not-finite (names the entry); no-convergence (limit)
 * @accuracy    residual 1e-12 of the norm on random and graded matrices (eigenvalues.test.ts)
 * @source      Martin, Peters, Wilkinson, The QR algorithm for real Hessenberg matrices, Numer. Math. 14 (1970), from memory
 */
export function eigenvalues(A: Float64Array, n: number, work: EigenvalueWorkspace = eigenvalueWorkspace(n)): EigenvalueWorkspace {
  const { H } = work
  for (let k = 0; k < n * n; k++) {
    const value = A[k]
    if (!(value - value === 0)) {
      const field = `entry ${Math.floor(k / n)},${k % n}`
      throw new NumericError('not-finite', { field, value, text: `The matrix has ${value} at ${field}; its eigenvalues were not computed.` })
    }
    H[k] = value
  }
  balance(H, n, work.scale)
  toHessenberg(H, n)
  hessenbergEigenvalues(H, n, work.re, work.im)
  return work
}

/** Largest modulus among eigenvalues already computed. */
export function spectralRadius(re: Float64Array, im: Float64Array, n: number): number {
  let largest = 0
  for (let k = 0; k < n; k++) {
    const modulus = im[k] === 0 ? Math.abs(re[k]) : Math.hypot(re[k], im[k])
    if (modulus > largest) largest = modulus
  }
  return largest
}

/** H ← S⁻¹·H·S, S of powers of 2: rows and columns weigh alike, eigenvalues unchanged, no rounding. */
export function balance(H: Float64Array, n: number, scale: Float64Array): void {
  scale.fill(1)
  for (let sweep = 0; sweep < 12; sweep++) {
    let settled = true
    for (let i = 0; i < n; i++) {
      let row = 0
      let column = 0
      for (let j = 0; j < n; j++) {
        if (j === i) continue
        row += Math.abs(H[i * n + j])
        column += Math.abs(H[j * n + i])
      }
      if (row === 0 || column === 0) continue
      let f = 1
      const total = row + column
      while (column < row / 2 && f < 1e150) {
        column *= 4
        f *= 2
      }
      while (column >= row * 2 && f > 1e-150) {
        column /= 4
        f /= 2
      }
      if ((column + row) / f >= 0.95 * total) continue
      settled = false
      scale[i] *= f
      const g = 1 / f
      for (let j = 0; j < n; j++) {
        H[i * n + j] *= g
        H[j * n + i] *= f
      }
    }
    if (settled) return
  }
}

/** Similar Hessenberg matrix by stabilised elimination; what stands under the first subdiagonal is set to 0. */
export function toHessenberg(H: Float64Array, n: number): void {
  for (let m = 1; m < n - 1; m++) {
    let pivot = m
    let x = H[m * n + m - 1]
    for (let i = m + 1; i < n; i++) {
      if (Math.abs(H[i * n + m - 1]) > Math.abs(x)) {
        x = H[i * n + m - 1]
        pivot = i
      }
    }
    if (x === 0) continue
    if (pivot !== m) {
      for (let j = m - 1; j < n; j++) {
        const t = H[pivot * n + j]
        H[pivot * n + j] = H[m * n + j]
        H[m * n + j] = t
      }
      for (let i = 0; i < n; i++) {
        const t = H[i * n + pivot]
        H[i * n + pivot] = H[i * n + m]
        H[i * n + m] = t
      }
    }
    for (let i = m + 1; i < n; i++) {
      let y = H[i * n + m - 1]
      if (y === 0) continue
      y /= x
      H[i * n + m - 1] = 0
      for (let j = m; j < n; j++) H[i * n + j] -= y * H[m * n + j]
      for (let r = 0; r < n; r++) H[r * n + m] += y * H[r * n + i]
    }
  }
}

/** Francis QR on a Hessenberg matrix, which it destroys. */
export function hessenbergEigenvalues(H: Float64Array, n: number, re: Float64Array, im: Float64Array): void {
  let norm = 0
  for (let i = 0; i < n; i++) for (let j = Math.max(i - 1, 0); j < n; j++) norm += Math.abs(H[i * n + j])
  let high = n - 1
  let shiftSum = 0
  let sweeps = 0
  while (high >= 0) {
    const low = smallSubdiagonal(H, n, high, norm)
    if (low === high) {
      re[high] = H[high * n + high] + shiftSum
      im[high] = 0
      high--
      sweeps = 0
      continue
    }
    if (low === high - 1) {
      pairAt(H, n, high, shiftSum, re, im)
      high -= 2
      sweeps = 0
      continue
    }
    if (sweeps === SWEEPS_PER_EIGENVALUE) {
      throw new NumericError('no-convergence', { limit: SWEEPS_PER_EIGENVALUE, residual: Math.abs(H[high * n + high - 1]), text: `An eigenvalue did not converge in ${SWEEPS_PER_EIGENVALUE} sweeps; no verdict was given.` })
    }
    const end = high * n + high
    let x = H[end]
    let y = H[end - n - 1]
    let w = H[end - 1] * H[end - n]
    if (sweeps > 0 && sweeps % 10 === 0) {
      // A stalled block gets an arbitrary shift.
      shiftSum += x
      for (let i = 0; i <= high; i++) H[i * n + i] -= x
      const s = Math.abs(H[end - 1]) + Math.abs(H[end - n - 2])
      x = 0.75 * s
      y = x
      w = -0.4375 * s * s
    }
    sweeps++
    shifts[0] = x
    shifts[1] = y
    shifts[2] = w
    doubleStep(H, n, low, high)
  }
}

/** Row at which the active block begins: the entry left of its diagonal is negligible, and is set to 0. */
function smallSubdiagonal(H: Float64Array, n: number, high: number, norm: number): number {
  for (let l = high; l > 0; l--) {
    const at = l * n + l
    const s = Math.abs(H[at - n - 1]) + Math.abs(H[at])
    if (Math.abs(H[at - 1]) <= 2.3e-16 * (s === 0 ? norm : s)) {
      H[at - 1] = 0
      return l
    }
  }
  return 0
}

function pairAt(H: Float64Array, n: number, high: number, shiftSum: number, re: Float64Array, im: Float64Array): void {
  const end = high * n + high
  const x = H[end]
  const y = H[end - n - 1]
  const w = H[end - 1] * H[end - n]
  const half = 0.5 * (y - x)
  const q = half * half + w
  const root = Math.sqrt(Math.abs(q))
  if (q >= 0) {
    const z = half + (half >= 0 ? root : -root)
    re[high - 1] = x + z + shiftSum
    re[high] = z !== 0 ? x - w / z + shiftSum : re[high - 1]
    im[high - 1] = 0
    im[high] = 0
  } else {
    re[high - 1] = x + half + shiftSum
    re[high] = re[high - 1]
    im[high - 1] = root
    im[high] = -root
  }
}

/** Sum and product data of the two shifts of the next sweep; numbers handed to a large function would each become an object. */
const shifts = new Float64Array(3)

/** One implicit double-shift sweep on rows and columns low…high, by `shifts`. */
function doubleStep(H: Float64Array, n: number, low: number, high: number): void {
  let x = shifts[0]
  let y = shifts[1]
  const w = shifts[2]
  let p = 0
  let q = 0
  let r = 0
  let m = high - 2
  for (; m >= low; m--) {
    const at = m * n + m
    const z = H[at]
    const rr = x - z
    const ss = y - z
    p = (rr * ss - w) / H[at + n] + H[at + 1]
    q = H[at + n + 1] - z - rr - ss
    r = H[at + 2 * n + 1]
    const s = Math.abs(p) + Math.abs(q) + Math.abs(r)
    p /= s
    q /= s
    r /= s
    if (m === low) break
    const u = Math.abs(H[at - 1]) * (Math.abs(q) + Math.abs(r))
    const v = Math.abs(p) * (Math.abs(H[at - n - 1]) + Math.abs(z) + Math.abs(H[at + n + 1]))
    if (u <= 2.3e-16 * v) break
  }
  for (let i = m + 2; i <= high; i++) {
    H[i * n + i - 2] = 0
    if (i > m + 2) H[i * n + i - 3] = 0
  }
  for (let k = m; k < high; k++) {
    const last = k === high - 1
    if (k > m) {
      p = H[k * n + k - 1]
      q = H[(k + 1) * n + k - 1]
      r = last ? 0 : H[(k + 2) * n + k - 1]
      x = Math.abs(p) + Math.abs(q) + Math.abs(r)
      if (x === 0) continue
      p /= x
      q /= x
      r /= x
    }
    const s = p >= 0 ? Math.sqrt(p * p + q * q + r * r) : -Math.sqrt(p * p + q * q + r * r)
    if (k === m) {
      if (low !== m) H[k * n + k - 1] = -H[k * n + k - 1]
    } else {
      H[k * n + k - 1] = -s * x
    }
    p += s
    x = p / s
    y = q / s
    const z = r / s
    q /= p
    r /= p
    const row = k * n
    if (last) {
      for (let j = k; j <= high; j++) {
        const t = H[row + j] + q * H[row + n + j]
        H[row + j] -= t * x
        H[row + n + j] -= t * y
      }
      for (let i = low; i <= high; i++) {
        const at = i * n + k
        const t = x * H[at] + y * H[at + 1]
        H[at] -= t
        H[at + 1] -= t * q
      }
    } else {
      for (let j = k; j <= high; j++) {
        const t = H[row + j] + q * H[row + n + j] + r * H[row + 2 * n + j]
        H[row + j] -= t * x
        H[row + n + j] -= t * y
        H[row + 2 * n + j] -= t * z
      }
      const end = k + 3 < high ? k + 3 : high
      for (let i = low; i <= end; i++) {
        const at = i * n + k
        const t = x * H[at] + y * H[at + 1] + z * H[at + 2]
        H[at] -= t
        H[at + 1] -= t * q
        H[at + 2] -= t * r
      }
    }
  }
}
