import { describe, expect, it } from 'vitest'
import { analyse } from '../../../server/control/analyse.ts'
import type { JointModel } from '../../../server/control/model.ts'
import { poleZeroCancellation } from '../../../server/control/tuning/rules.ts'
import { startingValues } from '../../../server/control/tuning/starting-values.ts'
import type { Wanted } from '../../../server/control/tuning/starting-values.ts'
import { compliantJoint, rigidJoint } from '../simulation/joints.ts'

function phaseOf(model: JointModel, loop: 'current' | 'velocity' | 'position'): number {
  const phase = analyse(model).loops[loop]?.phase
  return phase?.kind === 'margin' ? phase.phaseMarginDeg : NaN
}

function tuned(model: JointModel, wanted: Wanted): JointModel {
  return { ...model, firmware: { ...model.firmware, ...startingValues(model, wanted).gains } }
}

const CROSSOVERS: Wanted = {
  current: { rule: 'pole-zero cancellation', phaseMarginDeg: 60 },
  velocity: { rule: 'crossover', crossoverHz: 20, phaseMarginDeg: 55 },
  position: { rule: 'crossover', crossoverHz: 4 },
}

describe('starting values', () => {
  it.each([0, 1, 2])('meets the wanted current margin exactly on a locked rotor with %s ticks of delay', (D) => {
    const model = rigidJoint({ plant: { k_e: 0 }, firmware: { mode: 'current', D } })
    for (const phaseMarginDeg of [35, 60, 75]) {
      expect(phaseOf(tuned(model, { current: { rule: 'pole-zero cancellation', phaseMarginDeg } }), 'current')).toBeCloseTo(phaseMarginDeg, 6)
    }
  })

  it('places the current crossover where asked, low supply included', () => {
    const model = rigidJoint({ plant: { k_e: 0 }, firmware: { mode: 'current', supply_compensated: false }, V_bus: 9 })
    const delay = analyse(tuned(model, { current: { rule: 'pole-zero cancellation', crossoverHz: 900 } })).loops.current?.delay
    expect(delay?.kind === 'margin' ? delay.crossoverHz : NaN).toBeCloseTo(900, 5)
  })

  it('equals the cancelling integral gain of control-model.md §7', () => {
    const [R, L, T] = [16.5, 0.0013, 1 / 15000]
    const { K_p, K_i } = poleZeroCancellation({ R, L, T, D: 1, supply: 1 }, { phaseMarginDeg: 60 })
    expect(K_i).toBeCloseTo((K_p * (Math.exp((R * T) / L) - 1)) / T, 6)
    // 60° with D = 1 is a crossover angle of 20°.
    expect((K_p * (Math.exp((R * T) / L) - 1)) / R).toBeCloseTo(2 * Math.sin(Math.PI / 18), 12)
  })

  it.each([['rigid', rigidJoint()], ['compliant', compliantJoint()]])('comes within a few degrees of the wanted velocity margin on the exact %s joint', (_, model) => {
    const m = tuned(model, CROSSOVERS)
    // The rule takes the current loop for a lag and the sampled window for a delay: 4° covers what that leaves out.
    expect(Math.abs(phaseOf(m, 'velocity') - 55)).toBeLessThan(4)
    expect(Math.abs(phaseOf(m, 'current') - 60)).toBeLessThan(2)
    expect(phaseOf(m, 'position')).toBeGreaterThan(60)
    expect(analyse(m).verdict).toBe('stable')
  })

  it.each<[string, Wanted]>([
    ['modulus and symmetric optimum', { current: { rule: 'modulus optimum' }, velocity: { rule: 'symmetric optimum', a: 3 }, position: { rule: 'modulus optimum' } }],
    ['SIMC', { current: { rule: 'SIMC' }, velocity: { rule: 'SIMC' }, position: { rule: 'SIMC' } }],
  ])('is stable with usable margins by %s', (_, wanted) => {
    const m = tuned(rigidJoint(), wanted)
    expect(analyse(m).verdict).toBe('stable')
    for (const loop of ['current', 'velocity', 'position'] as const) expect(phaseOf(m, loop)).toBeGreaterThan(40)
  })

  it('counts every delay: a longer window or a later sensor lowers the gain', () => {
    const wanted: Wanted = { current: { rule: 'modulus optimum' }, velocity: { rule: 'symmetric optimum', a: 3 }, position: { rule: 'SIMC' } }
    const base = startingValues(rigidJoint(), wanted)
    const wide = startingValues(rigidJoint({ firmware: { W: 32 } }), wanted)
    const late = startingValues(rigidJoint({ firmware: { sensor_delay: 4, outer_delay: 2 } }), wanted)
    const slow = startingValues(rigidJoint({ firmware: { D: 2 } }), wanted)
    expect(wide.gains.K_pv).toBeLessThan(base.gains.K_pv)
    expect(late.gains.K_pv).toBeLessThan(base.gains.K_pv)
    expect(slow.gains.K_pc).toBeLessThan(base.gains.K_pc)
    const velocity = base.steps[1]
    expect(velocity.delays['half the velocity window']).toBeCloseTo(16 / 4000 / 2, 12)
    expect(velocity.T_sigma).toBeCloseTo(Object.values(velocity.delays).reduce((a, b) => a + b, 0), 12)
    expect(late.steps[1].delays['sensor and outer task']).toBeCloseTo(6 / 15000, 12)
  })

  it('takes the ultimate gain from the exact loop', () => {
    const model = rigidJoint({ firmware: { mode: 'velocity' } })
    const { gains } = startingValues(model, { current: { rule: 'modulus optimum' }, velocity: { rule: 'ultimate gain' } })
    const limit = analyse({ ...model, firmware: { ...model.firmware, ...gains, K_iv: 0 } }).loops.velocity?.gainUp
    // 0.45 of the limit: the margin left is 1/0.45.
    expect(limit?.kind === 'margin' ? limit.factor : NaN).toBeCloseTo(1 / 0.45, 4)
  })

  it('keeps the gains of loops that the mode leaves open', () => {
    const model = rigidJoint({ firmware: { mode: 'current' } })
    const { gains, steps } = startingValues(model, { current: { rule: 'SIMC' } })
    expect(gains).toMatchObject({ K_pv: model.firmware.K_pv, K_iv: model.firmware.K_iv, K_pp: model.firmware.K_pp })
    expect(steps.map((s) => s.loop)).toEqual(['current'])
  })

  it.each<[string, string, Wanted]>([
    ['crossoverHz', 'out-of-range', { ...CROSSOVERS, velocity: { rule: 'crossover', crossoverHz: 200, phaseMarginDeg: 60 } }],
    ['crossoverHz', 'out-of-range', { ...CROSSOVERS, current: { rule: 'pole-zero cancellation', crossoverHz: 3000 } }],
    ['phaseMarginDeg', 'out-of-range', { ...CROSSOVERS, current: { rule: 'pole-zero cancellation', phaseMarginDeg: 95 } }],
    ['a', 'out-of-range', { ...CROSSOVERS, velocity: { rule: 'symmetric optimum', a: 1 } }],
    ['tau_c', 'out-of-range', { ...CROSSOVERS, velocity: { rule: 'SIMC', tau_c: 0 } }],
    ['wanted.position', 'bad-input', { current: CROSSOVERS.current, velocity: CROSSOVERS.velocity }],
  ])('refuses %s: %s', (field, code, wanted) => {
    expect(() => startingValues(rigidJoint(), wanted)).toThrow(expect.objectContaining({ code, details: expect.objectContaining({ field }) }))
  })

  it('names the highest crossover it would accept, and accepts it', () => {
    const ask = (crossoverHz: number): unknown => startingValues(rigidJoint(), { ...CROSSOVERS, velocity: { rule: 'crossover', crossoverHz, phaseMarginDeg: 60 } })
    let limit = NaN
    try {
      ask(500)
    } catch (error) {
      limit = (error as { details: { limit: number } }).details.limit
    }
    expect(limit).toBeGreaterThan(10)
    expect(() => ask(limit * 1.001)).toThrow()
    expect(() => ask(limit * 0.999)).not.toThrow()
  })
})
