import { describe, expect, it } from 'vitest'
import { zeroOrderHold } from '../../../server/control/discretise.ts'
import { eigenvalues } from '../../../server/control/eigenvalues.ts'
import { companion, entries, entryOf } from './entry.ts'

const list = entries('discretisation')

/** Numerator and denominator of a sampled system, highest power first: poles from Ad, numerator as det(zI − Ad + Bd·C) − det(zI − Ad). */
function sampledTransfer(num: number[], den: number[], h: number): { num: number[]; den: number[] } {
  const { A, B, C, D, n } = companion(num, den)
  const { Ad, Bd } = zeroOrderHold(A, B, n, 1, h)
  const closed = Ad.map((x, k) => x - Bd[Math.floor(k / n)] * C[k % n])
  const p = fromRoots(Ad, n)
  const q = fromRoots(closed, n)
  return { num: p.map((x, k) => q[k] - x + D * x), den: p }
}

function fromRoots(M: Float64Array, n: number): number[] {
  const { re, im } = eigenvalues(M, n)
  let c: [number, number][] = [[1, 0]]
  for (let k = 0; k < n; k++) {
    const next: [number, number][] = c.map(([a, b]) => [a, b])
    next.push([0, 0])
    c.forEach(([a, b], i) => {
      next[i + 1][0] -= a * re[k] - b * im[k]
      next[i + 1][1] -= a * im[k] + b * re[k]
    })
    c = next
  }
  return c.map(([a]) => a)
}

const near = (ours: number, published: number, tol: number): void => expect(Math.abs(ours - published)).toBeLessThanOrEqual(tol)

describe('published sampled systems', () => {
  it('covers every entry of the file', () => {
    expect(list.map((entry) => entry.id).sort()).toEqual(
      ['disc.ctms.speed.cont', 'disc.ctms.pos.zoh', 'disc.dblint.delay.ccs', 'disc.scipy.ss.zoh', ...Object.keys(FIRST), ...Object.keys(TRANSFERS)].sort(),
    )
  })

  const FIRST: Record<string, [number, number]> = { 'disc.first.zoh.a1.T0.2': [1, 0.2], 'disc.first.zoh.a5.T0.2': [5, 0.2], 'disc.first.zoh.a5.T0.06283': [5, 0.06283185307179587] }
  it.each(Object.entries(FIRST))('%s', (id, [a, T]) => {
    const entry = entryOf(list, id)
    const { k, pole } = entry.expected as { k: number; pole: number }
    const { num, den } = sampledTransfer([a], [1, a], T)
    near(num[1], k, entry.tolerance.abs ?? 0)
    near(-den[1], pole, entry.tolerance.abs ?? 0)
  })

  const TRANSFERS: Record<string, [number[], number[], number]> = {
    'disc.dblint.T0.1': [[1], [1, 0, 0], 0.1],
    // K/((Js + b)(Ls + R) + K²)
    'disc.motor.se480061': [[0.01], [0.005, 0.015, 0.0101], 0.1],
    'disc.s_s1.T1': [[1], [1, 1, 0], 1],
    'disc.antenna.fpw': [[1], [10, 1, 0], 1],
    'disc.osc.ccs': [[1], [1, 0, 1], 1],
    'disc.scipy.tf': [[0.25, 0.25, 0.5], [0.75, 0.75, 1], 0.5],
  }
  it.each(Object.entries(TRANSFERS))('%s', (id, [num, den, T]) => {
    const entry = entryOf(list, id)
    const ours = sampledTransfer(num, den, T)
    const abs = entry.tolerance.abs ?? 0
    const expected = entry.expected as { num?: number[]; den?: number[]; k?: number; zero?: number; poles?: number[] }
    if (expected.num && expected.den) {
      const padded = [...new Array<number>(ours.num.length - expected.num.length).fill(0), ...expected.num]
      const tol = (entry.tolerance.fields?.num as number | undefined) ?? abs
      // Coefficients through eigenvalues lose half the digits at double roots: 1e-8 at least.
      ours.num.forEach((x, k) => near(x, padded[k], Math.max(tol, 1e-8)))
      ours.den.forEach((x, k) => near(x, (expected.den as number[])[k], Math.max(abs, 1e-8)))
    } else {
      near(ours.num[1], expected.k as number, abs)
      near(-ours.num[2] / ours.num[1], expected.zero as number, abs)
      near(-ours.den[1], (expected.poles as number[])[0] + (expected.poles as number[])[1], 2 * abs)
    }
  })

  it('disc.ctms.speed.cont: poles and gain of the continuous motor', () => {
    const entry = entryOf(list, 'disc.ctms.speed.cont')
    const expected = entry.expected as { gain: number; poles: number[] }
    const { re } = eigenvalues(Float64Array.of(-0.1 / 0.01, 0.01 / 0.01, -0.01 / 0.5, -1 / 0.5), 2)
    const poles = [...re].sort((a, b) => a - b)
    poles.forEach((p, k) => near(p, expected.poles[k], entry.tolerance.abs ?? 0))
    near(0.01 / (0.01 * 0.5), expected.gain, 1e-12)
  })

  it('disc.ctms.pos.zoh: a stiff motor, ‖A·T‖ about 1500', () => {
    const entry = entryOf(list, 'disc.ctms.pos.zoh')
    const expected = entry.expected as { k: number; zeros: number[]; poles: number[] }
    const { J, b, K, R, L, Ts } = entry.inputs as Record<string, number>
    const { Ad, Bd } = zeroOrderHold(Float64Array.of(-R / L, -K / L, 0, K / J, -b / J, 0, 0, 1, 0), Float64Array.of(1 / L, 0, 0), 3, 1, Ts)
    const { re } = eigenvalues(Ad, 3)
    const poles = [...re].sort((a, c) => a - c)
    poles.forEach((p, k) => near(p, expected.poles[k], entry.tolerance.abs ?? 0))
    near(Bd[2], expected.k, (entry.tolerance.fields?.k as number) ?? 0)
    // Numerator C·adj(zI − Ad)·Bd of θ: θ⁺ = θ + a·i + b·ω + Bd₂·v.
    const [aii, aiw, , awi, aww, , ati, atw] = Ad
    const c1 = Bd[2] * -(aii + aww) + ati * Bd[0] + atw * Bd[1]
    const c0 = Bd[2] * (aii * aww - aiw * awi) + ati * (-aww * Bd[0] + aiw * Bd[1]) + atw * (awi * Bd[0] - aii * Bd[1])
    const root = Math.sqrt(c1 * c1 - 4 * Bd[2] * c0)
    const large = -(c1 + root) / (2 * Bd[2])
    const zeros = [large, c0 / (Bd[2] * large)]
    const tols = entry.tolerance.fields?.zeros as number[]
    zeros.forEach((z, k) => near(z, expected.zeros[k], tols[k]))
  })

  it('disc.dblint.delay.ccs: a fractional delay splits the hold', () => {
    const entry = entryOf(list, 'disc.dblint.delay.ccs')
    const { G0, G1 } = entry.expected as { G0: number[]; G1: number[] }
    const { h, tau } = entry.inputs as { h: number; tau: number }
    const A = Float64Array.of(0, 1, 0, 0)
    const B = Float64Array.of(0, 1)
    const late = zeroOrderHold(A, B, 2, 1, h - tau)
    const early = zeroOrderHold(A, B, 2, 1, tau)
    G0.forEach((x, i) => near(late.Bd[i], x, entry.tolerance.abs ?? 0))
    G1.forEach((x, i) => near(late.Ad[2 * i] * early.Bd[0] + late.Ad[2 * i + 1] * early.Bd[1], x, entry.tolerance.abs ?? 0))
  })

  it('disc.scipy.ss.zoh', () => {
    const entry = entryOf(list, 'disc.scipy.ss.zoh')
    const { ad, bd } = entry.expected as { ad: number; bd: number }
    const { Ad, Bd } = zeroOrderHold(Float64Array.of(1, 0, 0, 1), Float64Array.of(0.5, 0.5), 2, 1, 0.5)
    near(Ad[0], ad, entry.tolerance.abs ?? 0)
    near(Ad[1], 0, entry.tolerance.abs ?? 0)
    near(Bd[1], bd, entry.tolerance.abs ?? 0)
  })

})
