import { describe, expect, it } from 'vitest'
import { lastFifthFrom, peakMagnitude, peakToPeak, rootMeanSquare, stepMetrics } from '../../../server/control/simulation/metrics.ts'

describe('step metrics', () => {
  it('reads a first-order rise as τ·ln 9 and τ·ln 50', () => {
    const tau = 0.05
    const dt = 1e-4
    const response = Float64Array.from({ length: 8001 }, (_, k) => 3 + 4 * -Math.expm1((-k * dt) / tau))
    const m = stepMetrics({ response, dt, from: 3, to: 7 })
    // Straight lines between samples leave y″·dt²/8 over the slope: dt²/(8τ) = 2.5e-8 s.
    expect(Math.abs((m.riseTime.kind === 'time' ? m.riseTime.seconds : NaN) - tau * Math.log(9))).toBeLessThan(5e-8)
    expect(Math.abs((m.settlingTime.kind === 'time' ? m.settlingTime.seconds : NaN) - tau * Math.log(50))).toBeLessThan(5e-8)
    expect(m.overshoot).toBe(0)
    // Mean of 4·e^(−t/τ) over 0.64 … 0.8 s.
    expect(m.finalError).toBeCloseTo(((4 * tau) / 0.16) * (Math.exp(-0.64 / tau) - Math.exp(-0.8 / tau)), 7)
  })

  it('mirrors a downward step', () => {
    const up = [0, 0.3, 0.8, 1.2, 1.1, 0.95, 1.01, 1, 1, 1, 1]
    const a = stepMetrics({ response: up, dt: 1, from: 0, to: 1 })
    const b = stepMetrics({ response: up.map((y) => 5 - 2 * y), dt: 1, from: 5, to: 3 })
    expect(a.overshoot).toBeCloseTo(0.2, 12)
    expect(b.overshoot).toBeCloseTo(0.2, 12)
    if (a.riseTime.kind !== 'time' || b.riseTime.kind !== 'time') throw new Error('rises')
    expect(b.riseTime.seconds).toBeCloseTo(a.riseTime.seconds, 12)
    if (a.settlingTime.kind !== 'time' || b.settlingTime.kind !== 'time') throw new Error('settles')
    expect(b.settlingTime.seconds).toBeCloseTo(a.settlingTime.seconds, 12)
    // 0.95 → 1.01 enters the band at 0.98: half of the way from sample 5 to 6.
    expect(a.settlingTime.seconds).toBeCloseTo(5.5, 12)
    // 10 % at 1/3 of a sample, 90 % a quarter of the way from 0.8 to 1.2.
    expect(a.riseTime.seconds).toBeCloseTo(2.25 - 1 / 3, 12)
  })

  it('says when a response does not rise or settle', () => {
    const m = stepMetrics({ response: [0, 0.5, 0.6, 0.5, 0.6], dt: 1, from: 0, to: 1 })
    expect(m.riseTime).toEqual({ kind: 'not reached' })
    expect(m.settlingTime).toEqual({ kind: 'does not settle' })
    expect(m.overshoot).toBe(0)
  })

  it('has no rise time for a step of zero, and settles at once where nothing moves', () => {
    expect(stepMetrics({ response: [2, 2, 2], dt: 1, from: 2, to: 2 })).toMatchObject({
      riseTime: { kind: 'not reached' },
      settlingTime: { kind: 'time', seconds: 0 },
      overshoot: 0,
      finalError: 0,
    })
  })

  it('takes the last fifth from 0.8 of the span on, the sample at 0.8 included', () => {
    expect(lastFifthFrom(4801)).toBe(3840)
    expect(lastFifthFrom(11)).toBe(8)
    expect(lastFifthFrom(12)).toBe(9)
    expect(stepMetrics({ response: [0, 0, 0, 0, 1, 1], dt: 1, from: 0, to: 1 }).finalError).toBe(0)
  })

  it('integrates squares by trapezoids', () => {
    expect(rootMeanSquare([0, 2])).toBeCloseTo(Math.SQRT2, 15)
    const sine = Float64Array.from({ length: 1001 }, (_, k) => Math.sin((2 * Math.PI * k) / 1000))
    expect(rootMeanSquare(sine)).toBeCloseTo(Math.SQRT1_2, 12)
    expect(peakMagnitude([1, -3, 2])).toBe(3)
    expect(peakToPeak([9, -3, 2, 4], 1)).toBe(7)
  })
})
