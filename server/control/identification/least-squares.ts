/** Linear least squares over any number of rows, in the space of one small triangle. */

export interface Fit {
  coefficients: Float64Array
  /** n×n, for unit variance of the rows' noise: (XᵀX)⁻¹. */
  covariance: Float64Array
  /** Sum of squared residuals and degrees of freedom. */
  residualSquares: number
  freedom: number
  /** Of X with columns scaled to one length: largest over smallest singular value; Infinity when a column adds nothing. */
  condition: number
}

const BLOCK = 256

/**
 * Covariance of a fit whose residuals correlate within groups of rows: the sandwich (XᵀX)⁻¹·(Σ gᵀg)·(XᵀX)⁻¹ over the
 * groups' scores g = Xᵀe, widened for their small number.
 *
 * @source  Liang & Zeger, Biometrika 73 (1986) (from memory)
 */
export class GroupedErrors {
  private readonly n: number
  private readonly score: Float64Array
  private readonly meat: Float64Array
  private groups = 0

  constructor(n: number) {
    this.n = n
    this.score = new Float64Array(n)
    this.meat = new Float64Array(n * n)
  }

  /** One row's regressors from `at` on, and its residual. */
  add(row: ArrayLike<number>, at: number, residual: number): void {
    for (let c = 0; c < this.n; c++) this.score[c] += row[at + c] * residual
  }

  /** The rows added since the last call are one group. */
  close(): void {
    const { n, score, meat } = this
    for (let r = 0; r < n; r++) for (let c = 0; c < n; c++) meat[r * n + c] += score[r] * score[c]
    score.fill(0)
    this.groups++
  }

  /** n×n; the plain σ²(XᵀX)⁻¹ where there are too few groups to tell. */
  covariance({ covariance, residualSquares, freedom }: Fit): Float64Array {
    const { n, meat, groups } = this
    const plain = residualSquares / Math.max(1, freedom)
    if (groups < 3 * n) return covariance.map((entry) => entry * plain)
    const half = product(covariance, meat, n)
    const factor = groups / (groups - n)
    return product(half, covariance, n).map((entry) => entry * factor)
  }
}

function product(P: Float64Array, Q: Float64Array, n: number): Float64Array {
  const out = new Float64Array(n * n)
  for (let r = 0; r < n; r++) for (let c = 0; c < n; c++) for (let k = 0; k < n; k++) out[r * n + c] += P[r * n + k] * Q[k * n + c]
  return out
}

/**
 * Accumulates rows [x | y] into the triangle of a QR factorisation by Householder reflections, block by block.
 *
 * @accuracy  as Householder QR of the whole matrix: 1e-10 on the published ARX entry (identification.test.ts)
 * @source    Golub & Van Loan, Matrix Computations, sequential QR (from memory)
 */
export class LeastSquares {
  private readonly n: number
  private readonly width: number
  /** Triangle on top, waiting rows below. */
  private readonly M: Float64Array
  private waiting = 0
  private rows = 0

  constructor(n: number) {
    this.n = n
    this.width = n + 1
    this.M = new Float64Array((this.width + BLOCK) * this.width)
  }

  /** One row: n regressors and the response behind them. */
  add(row: ArrayLike<number>): void {
    const { M, width } = this
    const at = (width + this.waiting) * width
    for (let c = 0; c < width; c++) M[at + c] = row[c]
    this.waiting++
    this.rows++
    if (this.waiting === BLOCK) this.fold()
  }

  private fold(): void {
    reflect(this.M, this.width + this.waiting, this.width, this.width)
    this.waiting = 0
  }

  /** Least squares of the rows so far; `spent` are degrees of freedom used up before. */
  solve(spent = 0): Fit {
    this.fold()
    const { M, n, width } = this
    const lengths = new Float64Array(n)
    for (let c = 0; c < n; c++) {
      for (let r = 0; r <= c; r++) lengths[c] += M[r * width + c] ** 2
      lengths[c] = Math.sqrt(lengths[c])
    }
    const S = new Float64Array(n * n)
    for (let r = 0; r < n; r++) for (let c = r; c < n; c++) S[r * n + c] = lengths[c] > 0 ? M[r * width + c] / lengths[c] : 0
    const condition = conditionOf(S, n)
    const coefficients = new Float64Array(n)
    const covariance = new Float64Array(n * n)
    if (Number.isFinite(condition)) {
      const inverse = invertTriangle(S, n)
      for (let r = 0; r < n; r++) {
        for (let c = r; c < n; c++) coefficients[r] += (inverse[r * n + c] * M[c * width + n]) / lengths[r]
        for (let c = 0; c < n; c++) {
          let sum = 0
          for (let k = Math.max(r, c); k < n; k++) sum += inverse[r * n + k] * inverse[c * n + k]
          covariance[r * n + c] = sum / (lengths[r] * lengths[c])
        }
      }
    }
    return { coefficients, covariance, condition, residualSquares: M[n * width + n] ** 2, freedom: this.rows - n - spent }
  }
}

/** Householder reflections on the first `columns` columns of a rows×width matrix: what is below the diagonal becomes 0. */
export function reflect(M: Float64Array, rows: number, width: number, columns: number): void {
  for (let c = 0; c < columns && c < rows; c++) {
    let norm = 0
    for (let r = c; r < rows; r++) norm += M[r * width + c] ** 2
    if (norm === 0) continue
    norm = Math.sqrt(norm)
    const alpha = M[c * width + c] > 0 ? -norm : norm
    const head = M[c * width + c] - alpha
    M[c * width + c] = head
    const scale = -1 / (alpha * head)
    for (let k = c + 1; k < width; k++) {
      let sum = 0
      for (let r = c; r < rows; r++) sum += M[r * width + c] * M[r * width + k]
      sum *= scale
      for (let r = c; r < rows; r++) M[r * width + k] -= sum * M[r * width + c]
    }
    M[c * width + c] = alpha
    for (let r = c + 1; r < rows; r++) M[r * width + c] = 0
  }
}

function invertTriangle(S: Float64Array, n: number): Float64Array {
  const X = new Float64Array(n * n)
  for (let c = 0; c < n; c++) {
    X[c * n + c] = 1 / S[c * n + c]
    for (let r = c - 1; r >= 0; r--) {
      let sum = 0
      for (let k = r + 1; k <= c; k++) sum += S[r * n + k] * X[k * n + c]
      X[r * n + c] = -sum / S[r * n + r]
    }
  }
  return X
}

/** Ratio of the extreme singular values of a small matrix, by one-sided Jacobi rotations. */
function conditionOf(S: Float64Array, n: number): number {
  const A = S.slice()
  for (let sweep = 0; sweep < 40; sweep++) {
    let off = 0
    for (let p = 0; p < n - 1; p++) {
      for (let q = p + 1; q < n; q++) {
        let [a, b, g] = [0, 0, 0]
        for (let r = 0; r < n; r++) {
          a += A[r * n + p] ** 2
          b += A[r * n + q] ** 2
          g += A[r * n + p] * A[r * n + q]
        }
        if (g === 0) continue
        off = Math.max(off, Math.abs(g) / Math.sqrt(a * b))
        const zeta = (b - a) / (2 * g)
        const t = Math.sign(zeta || 1) / (Math.abs(zeta) + Math.sqrt(1 + zeta * zeta))
        const cos = 1 / Math.sqrt(1 + t * t)
        for (let r = 0; r < n; r++) {
          const x = A[r * n + p]
          const y = A[r * n + q]
          A[r * n + p] = cos * (x - t * y)
          A[r * n + q] = cos * (t * x + y)
        }
      }
    }
    if (off < 1e-14) break
  }
  let [low, high] = [Infinity, 0]
  for (let c = 0; c < n; c++) {
    let sum = 0
    for (let r = 0; r < n; r++) sum += A[r * n + c] ** 2
    low = Math.min(low, Math.sqrt(sum))
    high = Math.max(high, Math.sqrt(sum))
  }
  return low > 1e-15 * high ? high / low : Infinity
}
