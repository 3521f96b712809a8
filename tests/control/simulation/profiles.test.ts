import { describe, expect, it } from 'vitest'
import { referenceOf } from '../../../server/control/simulation/profiles.ts'

describe('set-point profiles', () => {
  it('runs a trapezoid within its limits, with the closed-form duration', () => {
    const reference = referenceOf({ profile: 'trapezoid', step_to: -1, rate_limit: 2, acceleration_limit: 8 }, 1)
    // Two ramps of 0.25 s and 1.5 rad between them at 2 rad/s.
    const end = 2 / 2 + 0.25
    const dt = 1e-4
    let [before, speed] = [1, 0]
    for (let k = 1; k * dt <= end + 0.01; k++) {
      const value = reference(k * dt)
      const rate = (value - before) / dt
      expect(Math.abs(rate)).toBeLessThanOrEqual(2 + 1e-9)
      expect(Math.abs(rate - speed) / dt).toBeLessThanOrEqual(8 + 1e-6)
      ;[before, speed] = [value, rate]
    }
    expect(reference(end / 2)).toBeCloseTo(0, 12)
    expect(reference(end - 1e-3)).toBeGreaterThan(-1)
    expect(reference(end)).toBe(-1)
  })

  it('turns a trapezoid too short for its rate into a triangle', () => {
    const reference = referenceOf({ profile: 'trapezoid', step_to: 0.5, rate_limit: 100, acceleration_limit: 2 }, 0)
    // s = 2·(a·t²/2) with t = end/2: end = 2·√(s/a).
    expect(reference(0.5)).toBeCloseTo(0.25, 12)
    expect(reference(0.25)).toBeCloseTo(0.0625, 12)
    expect(reference(1)).toBe(0.5)
  })

  it('swings a sine about the start', () => {
    const reference = referenceOf({ profile: 'sine', amplitude: 0.2, frequency: 4 }, 1)
    expect(reference(0)).toBe(1)
    expect(reference(1 / 16)).toBeCloseTo(1.2, 12)
  })

  it('holds uploaded values until the next, whatever the last bit of the clocks', () => {
    const times = Array.from({ length: 100 }, (_, k) => k * 0.001)
    const reference = referenceOf({ profile: 'samples', times, values: times.map((_, k) => k) }, 0)
    for (let k = 0; k < 400; k++) expect(reference(k / 4000)).toBe(Math.floor(k / 4))
    expect(reference(5)).toBe(99)
  })

  it.each([
    [{ profile: 'samples', times: [0, 0], values: [1, 2] }, 'bad-input'],
    [{ profile: 'samples', times: [], values: [] }, 'bad-input'],
    [{ profile: 'samples', times: [0, 1], values: [1] }, 'bad-input'],
    [{ profile: 'samples', times: [0, 1], values: [1, NaN] }, 'not-finite'],
    [{ profile: 'trapezoid', step_to: 1, rate_limit: 0, acceleration_limit: 1 }, 'out-of-range'],
    [{ profile: 'sine', amplitude: Infinity, frequency: 1 }, 'not-finite'],
    [{ profile: 'step', step_to: NaN }, 'not-finite'],
  ] as const)('refuses %j', (profile, code) => {
    expect(() => referenceOf(profile, 0)).toThrow(expect.objectContaining({ code }))
  })
})
