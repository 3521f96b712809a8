import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { NumericError } from '../../server/control/errors.ts'
import { nearestAdmissible, PQ_LIMIT, timingOf } from '../../server/control/timing.ts'

function refusal(f_c: number, f_o: number): NumericError {
  try {
    timingOf(f_c, f_o)
  } catch (error) {
    if (error instanceof NumericError) return error
  }
  throw new Error(`${f_c}/${f_o} was admitted`)
}

describe('the two rates', () => {
  it.each([
    [15000, 4000, 15, 4], [4000, 4000, 1, 1], [25700, 25500, 257, 255], [511, 1, 511, 1], [0.3, 0.1, 3, 1], [1.5e4, 4e3, 15, 4], [15000.5, 7500.25, 2, 1], [1e-3, 5e-4, 2, 1],
  ])('%d over %d is %d/%d', (f_c, f_o, p, q) => {
    expect(timingOf(f_c, f_o)).toMatchObject({ p, q })
  })

  it('takes a rate that no decimal can state, given as its nearest double', () => {
    expect(timingOf(15000, (15000 * 7) / 26)).toMatchObject({ p: 26, q: 7 })
  })

  it.each([
    [15000, 3999, 4000, /5000\/1333/],
    [15000.000001, 4000, 4000.0000002666667, /p \+ q/],
    [3e6, 7, 3e6 / 511, /511\/1/],
  ])('refuses %d over %d and proposes %d', (f_c, f_o, proposal, text) => {
    const error = refusal(f_c, f_o)
    expect(error.code).toBe('rates-refused')
    expect(error.message).toMatch(text)
    expect(Math.abs((error.details.proposal as number) / proposal - 1)).toBeLessThan(1e-15)
    // What is proposed is admitted as it stands.
    expect(timingOf(f_c, error.details.proposal as number).p).toBeGreaterThan(0)
  })

  it('refuses an outer task faster than the current task', () => {
    expect(refusal(4000, 5000).message).toMatch(/faster/)
  })

  it.each([NaN, Infinity, -1, 0])('refuses the rate %d by name', (f) => {
    expect(refusal(f, 4000).details.field).toBe('firmware.f_c')
    expect(refusal(4000, f).details.field).toBe('firmware.f_o')
  })

  it('lays out every tick of the hyperperiod', () => {
    const { tick, offset, q } = timingOf(15000, 4000)
    expect([...tick]).toEqual([0, 3, 7, 11])
    expect([...offset]).toEqual([0, 3, 2, 1])
    expect(q).toBe(4)
  })

  it('proposes the least relative change of all admissible ratios', () => {
    fc.assert(
      fc.property(fc.double({ min: 1000, max: 100000, noNaN: true }), fc.double({ min: 1.01, max: 400, noNaN: true }), (f_c, ratio) => {
        const f_o = f_c / ratio
        const best = nearestAdmissible(f_c, f_o)
        const change = Math.abs(best.f_o / f_o - 1)
        for (let q = 1; q <= PQ_LIMIT / 2; q++) {
          for (let p = Math.max(q, Math.floor(q * ratio) - 1); p <= Math.min(PQ_LIMIT - q, Math.ceil(q * ratio) + 1); p++) {
            expect(change).toBeLessThanOrEqual(Math.abs((f_c * q) / p / f_o - 1) + 1e-15)
          }
        }
      }),
      { seed: 3, numRuns: 30 },
    )
  })
})
