import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { analyse } from '../../server/control/analyse.ts'
import { complexEigenvalues } from '../../server/control/complex-matrix.ts'
import type { ControlMode, JointModel } from '../../server/control/model.ts'
import { currentMonodromy, outerMonodromy } from '../../server/control/monodromy.ts'
import { outerSteps } from '../../server/control/outer-steps.ts'
import { sampleJoint } from '../../server/control/sampled-joint.ts'
import { timingOf } from '../../server/control/timing.ts'
import { verdict } from '../../server/control/verdict.ts'
import { perturbedRadius } from './perturbation.ts'
import { MOTORS, plausibleJoint } from './random-joints.ts'
import { growthPerHyperperiod } from './tick-simulation.ts'

const stableLoops = (model: JointModel) => (Object.entries(analyse(model).loops) as [ControlMode, NonNullable<ReturnType<typeof analyse>['loops']['current']>][]).filter(([, loop]) => loop.verdict === 'stable')

/** ρ(Φ(f)) at 1/f = 1 + d·e^{jα}: −1/f is an eigenvalue of L somewhere on the unit circle exactly where ρ passes 1, and |1 + λ| = d there. */
function radiusAround(model: JointModel, closure: ControlMode, d: number): (alpha: number) => number {
  const radius = perturbedRadius(model, closure)
  return (alpha) => {
    const re = 1 + d * Math.cos(alpha)
    const im = d * Math.sin(alpha)
    return radius(1 / Math.hypot(re, im), Math.atan2(im, re))
  }
}

/** The largest value of f over half a turn, the best of a grid climbed from both sides. */
function largest(f: (alpha: number) => number, points: number): number {
  const at = (k: number) => (Math.PI * k) / points
  const values = Array.from({ length: points + 1 }, (_, k) => f(at(k)))
  const top = values.indexOf(Math.max(...values))
  let low = at(Math.max(0, top - 1))
  let high = at(Math.min(points, top + 1))
  for (let step = 0; step < 30; step++) {
    const a = low + (high - low) / 3
    const b = high - (high - low) / 3
    if (f(a) > f(b)) high = b
    else low = a
  }
  return Math.max(values[top], f(0.5 * (low + high)))
}

describe('M_s by perturbing Φ, at any ratio of rates', () => {
  it('is one over the radius about −1 that no locus enters, over random joints', () => {
    const compared: Record<string, number> = {}
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        for (const [closure, loop] of stableLoops(model)) {
          if (loop.M_s.kind !== 'peak' || loop.M_s.value < 1.02) continue
          const within = largest(radiusAround(model, closure, 0.998 / loop.M_s.value), 60)
          const beyond = largest(radiusAround(model, closure, 1.002 / loop.M_s.value), 60)
          expect(within, `${closure}: no locus enters`).toBeLessThan(1)
          expect(beyond, `${closure}: one is met just beyond`).toBeGreaterThan(1)
          const q = closure === 'current' ? 1 : timingOf(model.firmware.f_c, model.firmware.f_o).q
          compared[q > 1 ? `${closure}, many rates` : closure] = (compared[q > 1 ? `${closure}, many rates` : closure] ?? 0) + 1
        }
      }),
      { seed: 512, numRuns: 30 },
    )
    expect(Object.keys(compared).sort()).toEqual(['current', 'position', 'position, many rates', 'velocity', 'velocity, many rates'])
  }, 60_000)
})

/** Least lag/angle over the lags at which Φ(e^{−jφ}) has an eigenvalue e^{jθ}, θ > 0: the delay in ticks that brings it there. */
function leastDelay(model: JointModel, closure: ControlMode): number {
  const joint = sampleJoint(model)
  const steps = closure === 'current' ? null : outerSteps(joint)
  const spectrum = (phi: number) => {
    const factor = { re: Math.cos(phi), im: -Math.sin(phi) }
    const { n, Phi, PhiIm } = steps ? outerMonodromy(joint, steps, closure as 'velocity' | 'position', factor) : currentMonodromy(joint, factor)
    const re = new Float64Array(n)
    const im = new Float64Array(n)
    complexEigenvalues({ n, re: Phi.slice(), im: PhiIm ? PhiIm.slice() : new Float64Array(n * n) }, re, im)
    return Array.from(re, (r, k) => ({ modulus: Math.hypot(r, im[k]), angle: Math.atan2(im[k], r) })).filter((e) => e.angle > 0)
  }
  const outside = (phi: number) => spectrum(phi).filter((e) => e.modulus > 1).length
  let least = Infinity
  let before = outside(1e-6)
  const points = 720
  for (let k = 1; k < points; k++) {
    const phi = (2 * Math.PI * k) / points
    const now = outside(phi)
    if (now !== before) {
      let low = (2 * Math.PI * (k - 1)) / points || 1e-6
      let high = phi
      for (let step = 0; step < 45; step++) {
        const m = 0.5 * (low + high)
        if (outside(m) === before) low = m
        else high = m
      }
      const met = spectrum(high).reduce((a, b) => (Math.abs(a.modulus - 1) < Math.abs(b.modulus - 1) ? a : b))
      if (Math.abs(met.modulus - 1) < 1e-6) least = Math.min(least, high / met.angle)
    }
    before = now
  }
  return least
}

describe('the delay margin by perturbing Φ', () => {
  it('is the least lag over angle at which an eigenvalue meets the unit circle, where one rate alone appears', () => {
    const compared: Record<string, number> = {}
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const single: JointModel = { ...model, firmware: { ...model.firmware, f_c: 16000, f_o: 4000, W: Math.min(8, model.firmware.W) } }
        for (const [closure, loop] of stableLoops(single)) {
          if (loop.delay.kind !== 'margin') continue
          // A lag of nearly a whole turn hides at the scan's ends.
          const lag = loop.delay.delay * loop.delay.crossoverHz
          if (lag < 0.005 || lag > 0.995) continue
          expect(Math.abs(leastDelay(single, closure) / loop.delay.ticks - 1), closure).toBeLessThan(1e-5)
          compared[closure] = (compared[closure] ?? 0) + 1
        }
      }),
      { seed: 88, numRuns: 12 },
    )
    expect(Object.keys(compared).sort()).toEqual(['current', 'position', 'velocity'])
  }, 60_000)
})

describe('delays of the sensor and of the outer task', () => {
  const { plant, firmware } = MOTORS[0]
  const environment = { V_bus: 12, T_winding: 25 }
  const jointOf = (delays: { sensor_delay: number; outer_delay: number }, K_pv: number): JointModel => ({ plant, environment, firmware: { ...firmware, mode: 'velocity', K_iv: 0, ...delays, K_pv } })

  it.each([
    { sensor_delay: 0, outer_delay: 0 }, { sensor_delay: 1, outer_delay: 0 }, { sensor_delay: 2, outer_delay: 0 }, { sensor_delay: 5, outer_delay: 0 },
    { sensor_delay: 0, outer_delay: 2 }, { sensor_delay: 3, outer_delay: 1 },
  ])('$sensor_delay and $outer_delay ticks: the run tick by tick turns from decay to growth at the gain where ρ passes 1', (delays) => {
    let low = firmware.K_pv
    let high = firmware.K_pv * 40
    expect(verdict(jointOf(delays, low)).verdict).toBe('stable')
    expect(verdict(jointOf(delays, high)).verdict).toBe('unstable')
    for (let step = 0; step < 30; step++) {
      const m = Math.sqrt(low * high)
      if (verdict(jointOf(delays, m)).verdict === 'unstable') high = m
      else low = m
    }
    const { p, q } = timingOf(firmware.f_c, firmware.f_o)
    expect(growthPerHyperperiod(jointOf(delays, high * 0.97), 1200, p, q)).toBeLessThan(0)
    expect(growthPerHyperperiod(jointOf(delays, high * 1.03), 1200, p, q)).toBeGreaterThan(0)
  })

  it('lower the gain at which the loop becomes unstable, each tick more', () => {
    const limit = (sensor_delay: number): number => {
      let low = firmware.K_pv
      let high = firmware.K_pv * 40
      for (let step = 0; step < 30; step++) {
        const m = Math.sqrt(low * high)
        if (verdict(jointOf({ sensor_delay, outer_delay: 0 }, m)).verdict === 'unstable') high = m
        else low = m
      }
      return high
    }
    const limits = [0, 1, 2, 3, 4].map(limit)
    expect(limits.toSorted((a, b) => b - a)).toEqual(limits)
  })
})
