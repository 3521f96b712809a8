import { describe, expect, it } from 'vitest'
import { complexEigenvalues, complexMatrix, solveComplex } from '../../../server/control/complex-matrix.ts'
import { expm, zeroOrderHold } from '../../../server/control/discretise.ts'
import { eigenvalues, spectralRadius } from '../../../server/control/eigenvalues.ts'
import { matrixProduct } from '../../../server/control/matrix-power.ts'
import { companion, entries, entryOf } from './entry.ts'

const list = entries('linear-algebra')
const flat = (rows: readonly (readonly number[])[]): Float64Array => Float64Array.from(rows.flat())
const exponential = (A: Float64Array, n: number, h = 1): Float64Array => expm(A, n, h, new Float64Array(n * n))
const sorted = (x: Float64Array): number[] => [...x].sort((a, b) => a - b)

describe('published matrix exponentials', () => {
  it.each(list.filter((entry) => entry.id.startsWith('expm.') && !entry.id.includes('slicot')))('$id', (entry) => {
    const rows = entry.inputs.A as number[][]
    const ours = exponential(flat(rows), rows.length)
    const wanted = flat(entry.expected as number[][])
    const best = flat(entry.recomputed as number[][])
    const largest = Math.max(...best.map(Math.abs))
    const { rel = 0, abs = 0 } = entry.tolerance
    wanted.forEach((x, k) => {
      // Relative to the entry, or 1e-13 of the largest where cancellation leaves an entry less than that.
      expect(Math.abs(ours[k] - x)).toBeLessThanOrEqual(Math.max(rel * Math.abs(x), abs, 1e-13 * largest))
      expect(Math.abs(ours[k] - best[k])).toBeLessThanOrEqual(Math.max(Math.max(rel, 1e-10) * Math.abs(best[k]), 1e-13 * largest))
    })
  })

  it('expm.slicot.mb05nd: exponential and integral are the hold', () => {
    const entry = entryOf(list, 'expm.slicot.mb05nd')
    const { F, H } = entry.recomputed as { F: number[][]; H: number[][] }
    const unit = Float64Array.from({ length: 25 }, (_, k) => (k % 6 === 0 ? 1 : 0))
    const { Ad, Bd } = zeroOrderHold(flat(entry.inputs.A as number[][]), unit, 5, 5, entry.inputs.delta as number)
    flat(F).forEach((x, k) => expect(Math.abs(Ad[k] - x)).toBeLessThanOrEqual(1e-13))
    flat(H).forEach((x, k) => expect(Math.abs(Bd[k] - x)).toBeLessThanOrEqual(1e-14))
    const published = entry.expected as { F: number[][] }
    flat(published.F).forEach((x, k) => expect(Math.abs(Ad[k] - x)).toBeLessThanOrEqual(entry.tolerance.abs ?? 0))
  })

  it('expm.slicot.mb05md', () => {
    const entry = entryOf(list, 'expm.slicot.mb05md')
    const { E, eig } = entry.expected as { E: number[][]; eig: number[] }
    const A = flat(entry.inputs.A as number[][])
    exponential(A, 4).forEach((x, k) => expect(Math.abs(x - flat(E)[k])).toBeLessThanOrEqual(entry.tolerance.abs ?? 0))
    sorted(eigenvalues(A, 4).re).forEach((x, k) => expect(Math.abs(x - eig[k])).toBeLessThanOrEqual(1e-12))
  })
})

describe('published eigenvalues', () => {
  const wilkinson = (n: number): Float64Array => Float64Array.from({ length: n * n }, (_, k) => {
    const i = Math.floor(k / n)
    const j = k % n
    return i === j ? Math.abs((n - 1) / 2 - i) : Math.abs(i - j) === 1 ? 1 : 0
  })

  it('eig.wilkinson7', () => {
    const entry = entryOf(list, 'eig.wilkinson7')
    sorted(eigenvalues(wilkinson(7), 7).re).forEach((x, k) => expect(Math.abs(x - (entry.expected as number[])[k])).toBeLessThanOrEqual(entry.tolerance.abs ?? 0))
  })

  it('eig.wilkinson21: two eigenvalues 7e-14 apart', () => {
    const entry = entryOf(list, 'eig.wilkinson21')
    const top = sorted(eigenvalues(wilkinson(21), 21).re).slice(-2)
    top.forEach((x, k) => expect(Math.abs(x - (entry.expected as number[])[k])).toBeLessThanOrEqual(5e-14))
  })

  it('eig.scipy.93: a singular matrix', () => {
    const entry = entryOf(list, 'eig.scipy.93')
    const ours = sorted(eigenvalues(flat(entry.inputs.A as number[][]), 3).re)
    ours.forEach((x, k) => expect(Math.abs(x - (entry.expected as number[])[k])).toBeLessThanOrEqual(entry.tolerance.abs ?? 0))
  })

  it('eig.grcar10', () => {
    const { spectral_radius, min_abs } = entryOf(list, 'eig.grcar10').recomputed as { spectral_radius: number; min_abs: number }
    const G = Float64Array.from({ length: 100 }, (_, k) => {
      const d = (k % 10) - Math.floor(k / 10)
      return d === -1 ? -1 : d >= 0 && d <= 3 ? 1 : 0
    })
    const { re, im } = eigenvalues(G, 10)
    expect(spectralRadius(re, im, 10)).toBeCloseTo(spectral_radius, 11)
    expect(Math.min(...re.map((x, k) => Math.hypot(x, im[k])))).toBeCloseTo(min_abs, 11)
  })

  it('eig.companion', () => {
    const entry = entryOf(list, 'eig.companion')
    const { A, n } = companion([1], entry.inputs.poly as number[])
    sorted(eigenvalues(A, n).re).forEach((x, k) => expect(Math.abs(x - (entry.expected as number[])[k])).toBeLessThanOrEqual(entry.tolerance.abs ?? 0))
  })
})

/** ∫₀^∞ e^{At}·Q·e^{Aᵀt} dt by doubling the interval: our exponential, then X(2t) = X(t) + E·X(t)·Eᵀ. */
function gramian(A: Float64Array, Q: Float64Array, n: number): Float64Array {
  const h = 1e-3
  // Van Loan's block: exp([−A Q; 0 Aᵀ]·h).
  const M = new Float64Array(4 * n * n)
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      M[i * 2 * n + j] = -A[i * n + j]
      M[i * 2 * n + n + j] = Q[i * n + j]
      M[(n + i) * 2 * n + n + j] = A[j * n + i]
    }
  }
  const X = exponential(M, 2 * n, h)
  const transpose = (Y: Float64Array): Float64Array => Float64Array.from({ length: n * n }, (_, k) => Y[(k % n) * n + Math.floor(k / n)])
  let E = Float64Array.from({ length: n * n }, (_, k) => X[(n + (k % n)) * 2 * n + n + Math.floor(k / n)])
  let W = matrixProduct(E, Float64Array.from({ length: n * n }, (_, k) => X[Math.floor(k / n) * 2 * n + n + (k % n)]), n)
  for (let step = 0; step < 20; step++) {
    const grown = matrixProduct(matrixProduct(E, W, n), transpose(E), n)
    W = W.map((x, k) => x + grown[k])
    E = matrixProduct(E, E, n) as Float64Array<ArrayBuffer>
  }
  return W
}

describe('published norms and a Lyapunov equation, by our exponential and hold', () => {
  it('lyap.oct', () => {
    const entry = entryOf(list, 'lyap.oct')
    const X = gramian(flat(entry.inputs.A as number[][]), flat(entry.inputs.Q as number[][]), 2)
    flat(entry.expected as number[][]).forEach((x, k) => expect(Math.abs(X[k] - x)).toBeLessThanOrEqual(entry.tolerance.abs ?? 0))
  })

  it('h2.c.first', () => {
    const entry = entryOf(list, 'h2.c.first')
    expect(Math.abs(Math.sqrt(gramian(Float64Array.of(-1), Float64Array.of(1), 1)[0]) - (entry.expected as number))).toBeLessThanOrEqual(1e-12)
  })

  it('h2.d.first: the published figure is right to 2e-8', () => {
    const entry = entryOf(list, 'h2.d.first')
    const { Ad, Bd } = zeroOrderHold(Float64Array.of(-1), Float64Array.of(1), 1, 1, 0.1)
    const norm = Math.sqrt((Bd[0] * Bd[0]) / (1 - Ad[0] * Ad[0]))
    expect(Math.abs(norm / (entry.recomputed as number) - 1)).toBeLessThanOrEqual(1e-13)
    expect(Math.abs(norm / (entry.expected as number) - 1)).toBeLessThanOrEqual(entry.tolerance.rel ?? 0)
  })

  it('h2.mimo: continuous, sampled, and the peak of the largest singular value', () => {
    const entry = entryOf(list, 'h2.mimo')
    const { H2, H2_zoh, Hinf } = entry.expected as Record<string, number>
    const A = flat(entry.inputs.A as number[][])
    const B = flat(entry.inputs.B as number[][])
    const C = flat(entry.inputs.C as number[][])
    const BB = Float64Array.from({ length: 9 }, (_, k) => B[2 * Math.floor(k / 3)] * B[2 * (k % 3)] + B[2 * Math.floor(k / 3) + 1] * B[2 * (k % 3) + 1])
    const X = gramian(A, BB, 3)
    const trace = (W: Float64Array): number => {
      let sum = 0
      for (let a = 0; a < 2; a++) for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) sum += C[a * 3 + i] * W[i * 3 + j] * C[a * 3 + j]
      return sum
    }
    expect(Math.abs(Math.sqrt(trace(X)) / H2 - 1)).toBeLessThanOrEqual(1e-9)
    const { Ad, Bd } = zeroOrderHold(A, B, 3, 2, entry.inputs.Ts as number)
    let sum = 0
    let state = Bd.slice()
    for (let k = 0; k < 4000; k++) {
      for (let a = 0; a < 2; a++) for (let b = 0; b < 2; b++) sum += (C[a * 3] * state[b] + C[a * 3 + 1] * state[2 + b] + C[a * 3 + 2] * state[4 + b]) ** 2
      state = Float64Array.from({ length: 6 }, (_, e) => Ad[3 * Math.floor(e / 2)] * state[e % 2] + Ad[3 * Math.floor(e / 2) + 1] * state[2 + (e % 2)] + Ad[3 * Math.floor(e / 2) + 2] * state[4 + (e % 2)])
    }
    expect(Math.abs(Math.sqrt(sum) / H2_zoh - 1)).toBeLessThanOrEqual(1e-9)
    // At zero frequency, where the note puts the peak: largest eigenvalue of GᴴG.
    const M = complexMatrix(3)
    M.re.set(A.map((x) => -x))
    const x = { n: 3, re: B.slice(), im: new Float64Array(6) }
    solveComplex(M, x, 2, { re: 0, im: 0 })
    const G = Float64Array.from({ length: 4 }, (_, e) => [0, 1, 2].reduce((t, i) => t + C[3 * Math.floor(e / 2) + i] * x.re[2 * i + (e % 2)], 0))
    const gram = complexMatrix(2)
    for (let i = 0; i < 2; i++) for (let j = 0; j < 2; j++) gram.re[2 * i + j] = G[i] * G[j] + G[2 + i] * G[2 + j]
    const re = new Float64Array(2)
    complexEigenvalues(gram, re, new Float64Array(2))
    expect(Math.abs(Math.sqrt(Math.max(...re)) / Hinf - 1)).toBeLessThanOrEqual(1e-9)
  })

  it('covers every entry of the file', () => {
    const named = ['eig.wilkinson7', 'eig.wilkinson21', 'eig.scipy.93', 'eig.grcar10', 'eig.companion', 'lyap.oct', 'h2.c.first', 'h2.d.first', 'h2.mimo']
    expect(list.filter((entry) => !entry.id.startsWith('expm.')).map((entry) => entry.id).sort()).toEqual(named.sort())
  })
})
