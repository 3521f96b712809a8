import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { outerSteps } from '../../server/control/outer-steps.ts'
import { sampleJoint } from '../../server/control/sampled-joint.ts'
import { stabilityOf } from '../../server/control/stability.ts'
import { timingOf } from '../../server/control/timing.ts'
import { verdict } from '../../server/control/verdict.ts'
import { MOTORS, plausibleJoint } from './random-joints.ts'
import { growthPerHyperperiod } from './tick-simulation.ts'

describe('the fast verdict', () => {
  it('gives the ρ and the verdict of all eigenvalues, over random joints', () => {
    let polynomial = 0
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const fast = verdict(model)
        const joint = sampleJoint(model)
        const full = stabilityOf(joint, joint.closes === 'current' ? null : outerSteps(joint), joint.closes)
        const rho = joint.closes === 'current' ? full.rho ** joint.timing.p : full.rho
        if (fast.route === 'polynomial') polynomial++
        // Both routes err by rounding times the eigenvalue's condition.
        expect(Math.abs(fast.rho - rho)).toBeLessThanOrEqual(1e-10 * Math.max(1, rho))
        if (joint.closes !== 'current') expect(fast.verdict).toBe(full.verdict)
      }),
      { seed: 31, numRuns: 600 },
    )
    // Else the property would compare a route with itself.
    expect(polynomial).toBeGreaterThan(300)
  })

  it('takes a wide spread of gains, stable and far from it', () => {
    const { plant, firmware } = MOTORS[0]
    const seen = new Set<string>()
    for (let a = -3; a <= 3; a += 0.25) {
      for (let b = -3; b <= 3; b += 0.5) {
        const model = { plant, firmware: { ...firmware, K_pv: firmware.K_pv * 10 ** a, K_pp: firmware.K_pp * 10 ** b }, environment: { V_bus: 12, T_winding: 25 } }
        const fast = verdict(model)
        const joint = sampleJoint(model)
        const full = stabilityOf(joint, outerSteps(joint), joint.closes)
        expect(Math.abs(fast.rho - full.rho)).toBeLessThanOrEqual(1e-10 * Math.max(1, full.rho))
        seen.add(`${fast.verdict} ${fast.route}`)
      }
    }
    expect(seen).toContain('stable polynomial')
    expect(seen).toContain('unstable polynomial')
  })
})

describe('ρ against the firmware run tick by tick', () => {
  it('is the growth of a plain simulation over random joints', () => {
    let compared = 0
    fc.assert(
      fc.property(plausibleJoint, (model) => {
        const { p, q } = timingOf(model.firmware.f_c, model.firmware.f_o)
        const { rho } = verdict(model)
        // Enough hyperperiods for the slowest mode to stand alone, as far as the time for a test goes.
        const ticks = 40000
        const hyperperiods = Math.floor(ticks / (p * q))
        if (Math.abs(Math.log(rho)) * hyperperiods < 8) return
        const growth = growthPerHyperperiod(model, hyperperiods, p, q)
        compared++
        expect(growth > 0).toBe(rho > 1)
        // Beats of a complex pair and a slower second mode disturb the rate by some units over the half run.
        expect(Math.abs(growth - Math.log(rho)) * (hyperperiods / 2)).toBeLessThanOrEqual(0.1 * Math.abs(Math.log(rho)) * (hyperperiods / 2) + 4)
      }),
      { seed: 77, numRuns: 40 },
    )
    expect(compared).toBeGreaterThan(10)
  })
})

describe('state hygiene', () => {
  const { plant, firmware } = MOTORS[0]
  const environment = { V_bus: 12, T_winding: 25 }
  it.each([
    ['no gain at all', { K_pc: 0, K_ic: 0 }],
    ['no velocity gains: the outer loops are open', { K_pv: 0, K_iv: 0 }],
    ['no position gains: the free angle is no state', { K_pp: 0, K_ip: 0 }],
    ['no integrators', { K_ip: 0, K_iv: 0, K_ic: 0 }],
  ])('%s leaves no eigenvalue at 1', (_, gains) => {
    expect(verdict({ plant, firmware: { ...firmware, ...gains }, environment }).verdict).toBe('stable')
  })

  it('a locked rotor without friction is seen by the current loop alone', () => {
    const locked = { ...plant, k_e: 0, b_load: 0, b_rotor: 0 }
    expect(verdict({ plant: locked, firmware: { ...firmware, mode: 'current' }, environment }).verdict).toBe('stable')
  })

  it('a free rotor without friction keeps its speed: on the boundary', () => {
    const free = { ...plant, b_load: 0, b_rotor: 0 }
    const answer = verdict({ plant: free, firmware: { ...firmware, mode: 'current' }, environment })
    expect(answer.verdict).toBe('boundary')
    expect(Math.abs(answer.rho - 1)).toBeLessThan(1e-9)
  })
})
