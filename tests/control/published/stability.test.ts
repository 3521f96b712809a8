import { describe, expect, it } from 'vitest'
import { integratorLimit } from '../../../server/control/closed-forms.ts'
import { eigenvalues, spectralRadius } from '../../../server/control/eigenvalues.ts'
import { largestRoot, rootWorkspace } from '../../../server/control/largest-root.ts'
import { rootsInside } from '../../../server/control/schur-cohn.ts'
import { companion, entries, entryOf } from './entry.ts'

const list = entries('stability')

/** Largest root's modulus of a polynomial (highest power first) by three of our ways, which must agree. */
function radius(poly: readonly number[]): number {
  const monic = poly.map((x) => x / poly[0])
  const n = poly.length - 1
  const { re, im } = eigenvalues(companion([1], monic).A, n)
  const rho = spectralRadius(re, im, n)
  const ascending = Float64Array.from(monic.slice().reverse())
  const work = rootWorkspace(n)
  if (largestRoot(ascending, n, 1e-15, null, work)) expect(Math.hypot(work.root.re, work.root.im)).toBeCloseTo(rho, 8)
  const side = rootsInside(ascending.slice(), new Float64Array(n + 1), n, 1e-15)
  if (side !== 'undecided') expect(side).toBe(rho < 1 ? 'inside' : 'not-inside')
  return rho
}

/** Where the largest root's modulus passes 1 between two gains. */
function limit(poly: (K: number) => number[], inside: number, outside: number): number {
  let a = inside
  let b = outside
  for (let step = 0; step < 60; step++) {
    const m = 0.5 * (a + b)
    const monic = poly(m)
    const { re, im } = eigenvalues(companion([1], monic).A, monic.length - 1)
    if (spectralRadius(re, im, monic.length - 1) < 1) a = m
    else b = m
  }
  return 0.5 * (a + b)
}

describe('published polynomials', () => {
  const POLYNOMIALS: Record<string, [number[], number]> = {
    'jury.nptel.ex2': [[1, -1.2, 0.07, 0.3, -0.08], 0.8],
    'jury.nptel.lec2_6': [[1, -1.7, -1, 0.8], 2],
    'jury.mathix': [[1, 2, 3, 23, 0, 4, 16], 3.2481133338035217],
    'jury.eglm03.hw7c': [[1, -3.6, 4, -1.6], 2],
  }
  it.each(Object.entries(POLYNOMIALS))('%s', (id, [poly, rho]) => {
    const entry = entryOf(list, id)
    expect((entry.inputs.poly as number[]).map(Number)).toEqual(poly)
    expect(radius(poly)).toBeCloseTo(rho, 9)
    expect(radius(poly) < 1).toBe((entry.recomputed as { stable: boolean }).stable)
  })
})

describe('published gain ranges', () => {
  const RANGES: Record<string, { poly: (K: number) => number[]; ends: [number, number, number][] }> = {
    // K(0.3679z + 0.2642)/((z − 0.3679)(z − 1)), the four-digit plant of the book.
    'range.ogata.2.3925': { poly: (K) => [1, 0.3679 * K - 1.3679, 0.2642 * K + 0.3679], ends: [[1, 4, 2.3925056775170326]] },
    'range.nptel.lec2ex3': { poly: (K) => [1, 0.084 * K - 1.5, 0.17 * K + 0.553, 0.019 * K - 0.05], ends: [[1, 5, 2.6296828248133033], [1, -1, -0.010989010989011418]] },
    'range.dblint.pd.kp10': { poly: (kd) => pd(10, kd), ends: [[5, 0.01, 0.5], [5, 40, 20]] },
    'range.dblint.pd.kp100': { poly: (kd) => pd(100, kd), ends: [[10, 0.01, 5], [10, 40, 20]] },
    'range.ccs.quarter': { poly: (K) => [1, -1.5, 0.5 + 0.25 * K], ends: [[1, 5, 2]] },
    'range.mlanswers.164159': { poly: (K) => [1, 0.00074321 * K - 1.9629, 0.00074321 * 0.9875 * K + 1.001 * 0.9619], ends: [[10, 100, 50.60239034949201], [10, 0.001, 0.02579326343942533]] },
  }
  it.each(Object.entries(RANGES))('%s', (id, { poly, ends }) => {
    expect(entryOf(list, id).source.length).toBeGreaterThan(0)
    // Compared against the recomputed ends: the published ones are rounded.
    for (const [inside, outside, at] of ends) expect(Math.abs(limit(poly, inside, outside) - at)).toBeLessThanOrEqual(1e-6 * Math.max(1, Math.abs(at)))
  })

  it.each([0, 1, 2, 3, 4, 5])('range.int.delay%i: integrator behind a delay', (D) => {
    const entry = entryOf(list, `range.int.delay${D}`)
    const published = (entry.expected as { KTmax: number }).KTmax
    expect(Math.abs(integratorLimit(D) - published)).toBeLessThanOrEqual(entry.tolerance.abs ?? 0)
    const poly = (K: number): number[] => Array.from({ length: D + 2 }, (_, k) => (k === 0 ? 1 : 0) - (k === 1 ? 1 : 0) + (k === D + 1 ? K : 0))
    expect(Math.abs(limit(poly, 0.1, 3) - published)).toBeLessThanOrEqual(1e-9)
  })

  it('covers every entry of the file', () => {
    const covered = ['jury.nptel.ex2', 'jury.nptel.lec2_6', 'jury.mathix', 'jury.eglm03.hw7c', ...Object.keys(RANGES), ...[0, 1, 2, 3, 4, 5].map((D) => `range.int.delay${D}`)]
    expect(list.map((entry) => entry.id).sort()).toEqual(covered.sort())
  })
})

/** Double integrator sampled at 0.1 s under u = −kp·x − kd·v. */
function pd(kp: number, kd: number): number[] {
  const h = 0.1
  // x⁺ = x + h·v + h²/2·u, v⁺ = v + h·u
  const a = 1 - (h * h * kp) / 2
  const b = h - (h * h * kd) / 2
  const c = -h * kp
  const d = 1 - h * kd
  return [1, -(a + d), a * d - b * c]
}
