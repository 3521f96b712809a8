import { NumericError } from './errors.ts'

/** Norm below which a diagonal Padé approximant of the degree has backward error under 2^−53 (Higham 2005, from memory). */
const THETA: readonly (readonly [number, number])[] = [
  [3, 1.495585217958292e-2], [5, 2.53939833006323e-1], [7, 9.504178996162932e-1], [9, 2.097847961257068], [13, 5.371920351148152],
]
const PADE: Readonly<Record<number, readonly number[]>> = {
  3: [120, 60, 12, 1],
  5: [30240, 15120, 3360, 420, 30, 1],
  7: [17297280, 8648640, 1995840, 277200, 25200, 1512, 56, 1],
  9: [17643225600, 8821612800, 2075673600, 302702400, 30270240, 2162160, 110880, 3960, 90, 1],
  13: [
    64764752532480000, 32382376266240000, 7771770303897600, 1187353796428800, 129060195264000, 10559470521600, 670442572800, 33522128640,
    1323241920, 40840800, 960960, 16380, 182, 1,
  ],
}
/** Squarings beyond this would mean a matrix that no joint has. */
const SQUARINGS_LIMIT = 60

/** Scratch matrices for one size, kept between calls: no allocation in sweeps. */
export interface ExpmWorkspace {
  readonly n: number
  readonly powers: readonly Float64Array[]
  readonly U: Float64Array
  readonly V: Float64Array
  readonly T: Float64Array
  readonly scale: Float64Array
}

export function expmWorkspace(n: number): ExpmWorkspace {
  const matrix = (): Float64Array => new Float64Array(n * n)
  return { n, powers: [matrix(), matrix(), matrix(), matrix(), matrix()], U: matrix(), V: matrix(), T: matrix(), scale: new Float64Array(n) }
}

/**
 * Matrix exponential of `h·A`.
 *
 * Balances by powers of 2, scales until a diagonal Padé approximant of degree 3 to 13 is exact to rounding, solves with partial
 * pivoting, squares back.
 *
 * @param A    n × n, row by row; not changed
 * @param out  n × n; may not be `A`
 * @throws     NumericError not-finite, or out-of-range when h·A is too large to exponentiate
 * @accuracy   1e-13 of the largest entry against closed forms and an eigenvalue route (discretise.test.ts)
 * @source     N. J. Higham, The scaling and squaring method for the matrix exponential revisited, SIAM J. Matrix Anal. Appl. 26 (2005), from memory
 */
export function expm(A: Float64Array, n: number, h: number, out: Float64Array, work: ExpmWorkspace = expmWorkspace(n)): Float64Array {
  const [M] = work.powers
  for (let k = 0; k < n * n; k++) {
    const value = A[k] * h
    if (!Number.isFinite(value)) {
      throw new NumericError('not-finite', { field: `entry ${Math.floor(k / n)},${k % n}`, value, text: `Entry ${Math.floor(k / n)},${k % n} of the matrix to exponentiate is ${value}; nothing was computed.` })
    }
    M[k] = value
  }
  balance(M, n, work.scale)
  const norm = norm1(M, n)
  let degree = 13
  for (const [m, limit] of THETA) {
    if (norm <= limit) {
      degree = m
      break
    }
  }
  let squarings = 0
  if (degree === 13 && norm > THETA[4][1]) {
    squarings = Math.max(0, Math.ceil(Math.log2(norm / THETA[4][1])))
    if (squarings > SQUARINGS_LIMIT) {
      throw new NumericError('out-of-range', { value: norm, limit: THETA[4][1] * 2 ** SQUARINGS_LIMIT, text: `The matrix to exponentiate has norm ${norm}, beyond any joint's; nothing was computed. Check units.` })
    }
    const factor = 2 ** -squarings
    for (let k = 0; k < n * n; k++) M[k] *= factor
  }
  pade(degree, n, out, work)
  keepZeroColumns(M, n, out)
  let current = out
  let spare = work.T
  for (let s = 0; s < squarings; s++) {
    multiply(current, current, n, spare)
    const swap = current
    current = spare
    spare = swap
  }
  if (current !== out) out.set(current)
  const { scale } = work
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) out[i * n + j] *= scale[i] / scale[j]
  return out
}

/**
 * Exact zero-order-hold step of `dx/dt = A·x + B·v` over `h`: x⁺ = Ad·x + Bd·v, with v constant in between.
 *
 * @param A  n × n   @param B  n × m   @param h  s, at least 0
 * @source   exponential of the block matrix [A B; 0 0] (C. F. Van Loan 1978, from memory)
 */
export function zeroOrderHold(A: Float64Array, B: Float64Array, n: number, m: number, h: number): { readonly Ad: Float64Array; readonly Bd: Float64Array } {
  const N = n + m
  const block = new Float64Array(N * N)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) block[i * N + j] = A[i * n + j]
    for (let j = 0; j < m; j++) block[i * N + n + j] = B[i * m + j]
  }
  const E = expm(block, N, h, new Float64Array(N * N))
  const Ad = new Float64Array(n * n)
  const Bd = new Float64Array(n * m)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) Ad[i * n + j] = E[i * N + j]
    for (let j = 0; j < m; j++) Bd[i * m + j] = E[i * N + n + j]
  }
  return { Ad, Bd }
}

/** M ← D⁻¹·M·D with D of powers of 2, so that rows and columns weigh alike; no rounding. */
function balance(M: Float64Array, n: number, scale: Float64Array): void {
  scale.fill(1)
  for (let sweep = 0; sweep < 20; sweep++) {
    let settled = true
    for (let i = 0; i < n; i++) {
      let row = 0
      let column = 0
      for (let j = 0; j < n; j++) {
        if (j === i) continue
        row += Math.abs(M[i * n + j])
        column += Math.abs(M[j * n + i])
      }
      if (row === 0 || column === 0) continue
      // At most 2^±512 a sweep, so that no scale overflows.
      const exponent = Math.max(-512, Math.min(512, Math.round(0.5 * Math.log2(row / column))))
      if (exponent === 0) continue
      const f = 2 ** exponent
      if (column * f + row / f >= 0.95 * (column + row)) continue
      settled = false
      scale[i] *= f
      for (let j = 0; j < n; j++) {
        M[i * n + j] /= f
        M[j * n + i] *= f
      }
    }
    if (settled) break
  }
  shrinkOneSided(M, n, scale)
}

/** A state that is only driven, or an input that only drives, can be scaled freely: to an entry sum of at most 1, which saves squarings. */
function shrinkOneSided(M: Float64Array, n: number, scale: Float64Array): void {
  for (let i = 0; i < n; i++) {
    let row = 0
    let column = 0
    for (let j = 0; j < n; j++) {
      row += Math.abs(M[i * n + j])
      column += Math.abs(M[j * n + i])
    }
    if ((row === 0) === (column === 0)) continue
    const excess = Math.min(512, Math.max(0, Math.ceil(Math.log2(row + column))))
    const f = row === 0 ? 2 ** -excess : 2 ** excess
    scale[i] *= f
    for (let j = 0; j < n; j++) {
      M[i * n + j] /= f
      M[j * n + i] *= f
    }
  }
}

/** r(M) = q(M)⁻¹·p(M) of the given degree, M in work.powers[0]. */
function pade(degree: number, n: number, out: Float64Array, work: ExpmWorkspace): void {
  const b = PADE[degree]
  const [M, M2, M4, M6, M8] = work.powers
  const { U, V, T } = work
  const size = n * n
  multiply(M, M, n, M2)
  if (degree > 3) multiply(M2, M2, n, M4)
  if (degree > 5) multiply(M4, M2, n, M6)
  if (degree === 9) multiply(M4, M4, n, M8)
  if (degree === 13) {
    for (let k = 0; k < size; k++) {
      T[k] = b[13] * M6[k] + b[11] * M4[k] + b[9] * M2[k]
      M8[k] = b[12] * M6[k] + b[10] * M4[k] + b[8] * M2[k]
    }
    multiply(M6, T, n, U)
    multiply(M6, M8, n, V)
    for (let k = 0; k < size; k++) {
      U[k] += b[7] * M6[k] + b[5] * M4[k] + b[3] * M2[k]
      V[k] += b[6] * M6[k] + b[4] * M4[k] + b[2] * M2[k]
    }
  } else {
    for (let k = 0; k < size; k++) {
      let odd = b[3] * M2[k]
      let even = b[2] * M2[k]
      if (degree > 3) {
        odd += b[5] * M4[k]
        even += b[4] * M4[k]
      }
      if (degree > 5) {
        odd += b[7] * M6[k]
        even += b[6] * M6[k]
      }
      if (degree === 9) {
        odd += b[9] * M8[k]
        even += b[8] * M8[k]
      }
      U[k] = odd
      V[k] = even
    }
  }
  for (let i = 0; i < n; i++) {
    U[i * n + i] += b[1]
    V[i * n + i] += b[0]
  }
  multiply(M, U, n, T)
  for (let k = 0; k < size; k++) {
    out[k] = V[k] + T[k]
    V[k] -= T[k]
  }
  solveInPlace(V, out, n)
}

/** A zero column of M is a state that nothing reads: its column of the exponential is the unit vector, exactly. */
function keepZeroColumns(M: Float64Array, n: number, out: Float64Array): void {
  for (let j = 0; j < n; j++) {
    let zero = true
    for (let i = 0; i < n && zero; i++) zero = M[i * n + j] === 0
    if (!zero) continue
    for (let i = 0; i < n; i++) out[i * n + j] = i === j ? 1 : 0
  }
}

/** X ← V⁻¹·X by elimination with partial pivoting; V is spoilt. */
function solveInPlace(V: Float64Array, X: Float64Array, n: number): void {
  for (let c = 0; c < n; c++) {
    let pivot = c
    for (let r = c + 1; r < n; r++) if (Math.abs(V[r * n + c]) > Math.abs(V[pivot * n + c])) pivot = r
    if (V[pivot * n + c] === 0) throw new NumericError('singular', { text: 'A matrix to invert is singular; nothing was computed.' })
    if (pivot !== c) {
      for (let j = 0; j < n; j++) {
        let t = V[c * n + j]
        V[c * n + j] = V[pivot * n + j]
        V[pivot * n + j] = t
        t = X[c * n + j]
        X[c * n + j] = X[pivot * n + j]
        X[pivot * n + j] = t
      }
    }
    const inverse = 1 / V[c * n + c]
    for (let r = c + 1; r < n; r++) {
      const f = V[r * n + c] * inverse
      if (f === 0) continue
      for (let j = c + 1; j < n; j++) V[r * n + j] -= f * V[c * n + j]
      for (let j = 0; j < n; j++) X[r * n + j] -= f * X[c * n + j]
    }
  }
  for (let r = n - 1; r >= 0; r--) {
    const inverse = 1 / V[r * n + r]
    for (let j = 0; j < n; j++) {
      let sum = X[r * n + j]
      for (let c = r + 1; c < n; c++) sum -= V[r * n + c] * X[c * n + j]
      X[r * n + j] = sum * inverse
    }
  }
}

/** out ← X·Y, all n × n; `out` is neither. */
function multiply(X: Float64Array, Y: Float64Array, n: number, out: Float64Array): void {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let sum = 0
      for (let k = 0; k < n; k++) sum += X[i * n + k] * Y[k * n + j]
      out[i * n + j] = sum
    }
  }
}

function norm1(M: Float64Array, n: number): number {
  let largest = 0
  for (let j = 0; j < n; j++) {
    let sum = 0
    for (let i = 0; i < n; i++) sum += Math.abs(M[i * n + j])
    if (sum > largest) largest = sum
  }
  return largest
}
