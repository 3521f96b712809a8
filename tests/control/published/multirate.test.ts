import { describe, expect, it } from 'vitest'
import { eigenvalues, spectralRadius } from '../../../server/control/eigenvalues.ts'
import { matrixPower, matrixProduct } from '../../../server/control/matrix-power.ts'
import { timingOf } from '../../../server/control/timing.ts'
import { entries, entryOf, type Entry } from './entry.ts'

const list = entries('multirate')

/** Where the radius of a monodromy matrix passes 1. */
function limit(Phi: (g: number) => { M: Float64Array; n: number }, high: number): number {
  let a = 1e-9
  let b = high
  for (let step = 0; step < 70; step++) {
    const m = 0.5 * (a + b)
    const { M, n } = Phi(m)
    const { re, im } = eigenvalues(M, n)
    if (spectralRadius(re, im, n) < 1) a = m
    else b = m
  }
  return 0.5 * (a + b)
}

/** Lowest gain in steps at which the loop is unstable brackets the first limit. */
function firstLimit(Phi: (g: number) => { M: Float64Array; n: number }, top: number): number {
  for (let k = 1; k <= 400; k++) {
    const g = (top * k) / 400
    const { M, n } = Phi(g)
    const { re, im } = eigenvalues(M, n)
    if (spectralRadius(re, im, n) >= 1 + 1e-12) return limit(Phi, g)
  }
  return NaN
}

describe('published and derived limits of multirate loops', () => {
  const integrators = list.filter((entry) => entry.id.startsWith('multi.int.'))
  it.each(integrators)('$id', (entry: Entry) => {
    const N = entry.inputs.N as number
    const fast = Float64Array.of(1, 1, 0, 1)
    // The new command acts one fast sample late: first step with the old one, then it is taken, then N − 1 steps.
    const Phi = (g: number): { M: Float64Array; n: number } => {
      // State (y, v): y⁺ = y + v with the old v; then v = −g·(y before); then N − 1 further steps.
      const update = Float64Array.of(1, 1, -g, 0)
      return { M: matrixProduct(matrixPower(fast, 2, N - 1), update, 2), n: 2 }
    }
    expect(Math.abs(firstLimit(Phi, 3) - (entry.expected as { g_max: number }).g_max)).toBeLessThanOrEqual(1e-9)
  })

  const cascades = list.filter((entry) => entry.id.startsWith('multi.cascade.'))
  it.each(cascades)('$id', (entry: Entry) => {
    const { N, p } = entry.inputs as { N: number; p: number }
    // State (y, v, r): v⁺ = p·v + (1 − p)·r, then y⁺ = y + v of before; the outer law sets r first.
    const fast = Float64Array.of(1, 1, 0, 0, p, 1 - p, 0, 0, 1)
    const Phi = (g: number): { M: Float64Array; n: number } => {
      const law = Float64Array.of(1, 0, 0, 0, 1, 0, -g, 0, 0)
      return { M: matrixProduct(matrixPower(fast, 3, N), law, 3), n: 3 }
    }
    expect(Math.abs(firstLimit(Phi, 3) - (entry.expected as { g_max: number }).g_max)).toBeLessThanOrEqual(1e-8)
  })

  it.each(['outer-first', 'inner-first'])('multi.15k4k.%s: 15 kHz over 4 kHz on our tick pattern', (order) => {
    const entry = entryOf(list, `multi.15k4k.${order}`)
    const { p, q, tick, offset } = timingOf(15000, 4000)
    // State (y, applied, latched, commanded); time in units of 1/(15 kHz·4), gain per ms.
    const unit = 1 / (15 * q)
    const Phi = (K: number): { M: Float64Array; n: number } => {
      // At an inner tick what was latched before is applied, and the newest command is latched.
      let M: Float64Array = Float64Array.of(1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1)
      const inner = Float64Array.of(1, 0, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 1)
      const outer = Float64Array.of(1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, -K, 0, 0, 0)
      let now = 0
      const events: { at: number; kind: 'outer' | 'inner' }[] = []
      for (let k = 0; k < q; k++) events.push({ at: tick[k] * q + offset[k], kind: 'outer' })
      for (let n = 0; n < p; n++) events.push({ at: n * q, kind: 'inner' })
      const rank = (kind: string): number => ((kind === 'outer') === (order === 'outer-first') ? 0 : 1)
      events.sort((a, b) => a.at - b.at || rank(a.kind) - rank(b.kind))
      const drift = (span: number): Float64Array => Float64Array.of(1, span * unit, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1)
      for (const event of events) {
        if (event.at > now) M = matrixProduct(drift(event.at - now), M, 4)
        now = event.at
        M = matrixProduct(event.kind === 'outer' ? outer : inner, M, 4)
      }
      return { M: matrixProduct(drift(p * q - now), M, 4), n: 4 }
    }
    expect(Math.abs(firstLimit((K) => Phi(K), 20) - (entry.expected as { K_max_per_ms: number }).K_max_per_ms)).toBeLessThanOrEqual(entry.tolerance.abs ?? 0)
  })
})
