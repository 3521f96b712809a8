import { describe, expect, it } from 'vitest'
import type { BenchLog } from '../../../server/control/identification/bench-log.ts'
import { benchRun } from '../../../server/control/identification/bench-run.ts'
import type { BenchRunOptions } from '../../../server/control/identification/bench-run.ts'
import type { Estimate } from '../../../server/control/identification/estimate.ts'
import { RUNS } from '../../../server/control/identification/estimate.ts'
import { identify } from '../../../server/control/identification/identify.ts'
import type { Known } from '../../../server/control/identification/identify.ts'
import type { JointModel } from '../../../server/control/model.ts'
import { compliantJoint, rigidJoint } from '../simulation/joints.ts'

const QUIET = { tau_load: 0, backlash: 0, encoder_quantised: true, current_quantised: true, theta_0: 0 }

/** Position steps to and fro with rests of 0.3 s. */
function lively(model: JointModel, change: Partial<BenchRunOptions> = {}, tau_load = 0): BenchLog {
  const values = [0.8, -0.8, 0.2, -0.2, 1, 0.9, 0]
  const times = values.map((_, k) => 0.3 * k)
  const run = { ...QUIET, profile: 'samples' as const, times, values, t_end: 2.1, tau_load }
  return benchRun(model, { run, every: 1, seed: 3, currentNoise: 0.002, voltageNoise: 0.02, countPosition: true, ...change })
}

/** A run in velocity or current mode through the given set-points, each held for `hold` s. */
function driven(model: JointModel, mode: 'velocity' | 'current', values: number[], hold: number, every = 1): BenchLog {
  const firmware = { ...model.firmware, mode }
  const times = values.map((_, k) => hold * k)
  const run = { ...QUIET, profile: 'samples' as const, times, values, t_end: hold * values.length }
  return benchRun({ ...model, firmware }, { run, every, seed: 5, currentNoise: 0.002, voltageNoise: 0.02, countPosition: true })
}

function knownOf({ plant }: JointModel): Known {
  return { N: plant.N, eta: plant.eta, R_on: plant.R_on }
}

function inertia({ plant }: JointModel): number {
  return plant.J_load + plant.eta * plant.N ** 2 * plant.J_rotor
}

/**
 * Within four standard errors and a floor: the standard errors cover noise, not what a fit from sampled rows leaves out
 * (straight lines between currents, the slope's window), which stays below `floor` of the value.
 */
function recovers(e: Estimate, truth: number, floor: number): void {
  expect(e.kind).toBe('estimate')
  if (e.kind !== 'estimate') return
  expect(e.standardError).toBeGreaterThan(0)
  expect(e.standardError).toBeLessThan(0.1 * truth)
  expect(Math.abs(e.value - truth), `${e.value} ± ${e.standardError} for ${truth}`).toBeLessThan(4 * e.standardError + floor * truth)
}

function remedyOf(e: Estimate): string {
  return e.kind === 'refused' ? e.remedy : 'given'
}

describe('identification of a known joint', () => {
  it.each([1, 2, 3])('recovers every value from a lively run logged at every tick, seed %s', (seed) => {
    const model = rigidJoint()
    const r = identify(lively(model, { seed }, 0.004), knownOf(model))
    recovers(r.R, 16, 0.01)
    recovers(r.k_e, 0.007232, 0.005)
    recovers(r.L, 0.0013, 0.03)
    recovers(r.J, inertia(model), 0.01)
    recovers(r.b, 0.001297, 0.02)
    recovers(r.tau_c, 0.0121, 0.01)
    recovers(r.tau_load, 0.004, 0.01)
    expect(r.torqueConstant).toBe('taken equal to k_e')
    expect(r.rate).toBeCloseTo(15000, 3)
    expect(r.repairs).toEqual([])
  })

  it('recovers all but the inductance at 1 kHz, and says what would show it', () => {
    const model = rigidJoint()
    const r = identify(lively(model, { every: 15 }, 0.004), knownOf(model))
    recovers(r.R, 16, 0.01)
    recovers(r.k_e, 0.007232, 0.005)
    recovers(r.J, inertia(model), 0.01)
    recovers(r.b, 0.001297, 0.02)
    recovers(r.tau_c, 0.0121, 0.01)
    expect(remedyOf(r.L)).toBe(RUNS.fast)
  })

  it('brings a warm run’s resistance back to 25 °C and takes a given torque constant', () => {
    const cold = rigidJoint()
    const model = { ...cold, environment: { ...cold.environment, T_winding: 80 } }
    const r = identify(lively(model), { ...knownOf(model), T_winding: 80, k_t: 0.0070 })
    recovers(r.R, 16, 0.01)
    recovers(r.J, (inertia(model) * 0.007) / 0.007232, 0.01)
    expect(r.torqueConstant).toBe('given')
  })

  it('sees a springy joint as one inertia', () => {
    const model = compliantJoint()
    const r = identify(lively(model), knownOf(model))
    recovers(r.R, 7.5, 0.01)
    recovers(r.k_e, 0.027753, 0.005)
    // The encoder on the output does not see the rotor swing, which the winding feels.
    recovers(r.L, 0.004, 0.1)
    recovers(r.J, inertia(model), 0.02)
    recovers(r.tau_c, 0.0916, 0.1)
  })

  it('takes duty and a bus voltage for the voltage', () => {
    const model = rigidJoint()
    const { voltage, ...log } = lively(model)
    const r = identify({ ...log, duty: (voltage as Float64Array).map((v) => v / 12) }, { ...knownOf(model), V_bus: 12 })
    recovers(r.R, 16, 0.01)
  })

  it('works from a speed column alone', () => {
    const model = rigidJoint()
    const { position: _, ...log } = lively(model)
    const r = identify(log, knownOf(model))
    recovers(r.k_e, 0.007232, 0.005)
    recovers(r.J, inertia(model), 0.01)
    recovers(r.tau_c, 0.0121, 0.02)
    expect(r.mechanical.residualUnit).toBe('rad/s')
  })

  it('gives residuals of the size of the noise', () => {
    const r = identify(lively(rigidJoint()), knownOf(rigidJoint()))
    // Noise of 2 mA beside a count of 1 mA and what the sampled speed leaves out; positions beside a count of 0.38 mrad.
    expect(r.electrical.residualUnit).toBe('A')
    expect(r.electrical.residual?.rms).toBeGreaterThan(0.0019)
    expect(r.electrical.residual?.rms).toBeLessThan(0.004)
    expect(r.mechanical.residual?.rms).toBeLessThan((1.5 * (2 * Math.PI)) / 2 ** 14 / Math.sqrt(12))
    expect(r.electrical.residual?.time.length).toBeLessThanOrEqual(2000)
  })
})

describe('refusals that name the run which would help', () => {
  const model = rigidJoint()

  it('has no electrical values without a voltage, and then no torque constant', () => {
    const { voltage: _, ...log } = lively(model)
    const r = identify(log, knownOf(model))
    expect([r.R, r.k_e, r.L].map(remedyOf)).toEqual([RUNS.voltage, RUNS.voltage, RUNS.voltage])
    expect(remedyOf(r.J)).toBe(RUNS.speeds)
    expect(identify(log, { ...knownOf(model), k_t: 0.007232 }).J.kind).toBe('estimate')
  })

  it('gives R and L of a held joint, and asks for motion', () => {
    const held = rigidJoint({ plant: { tau_c: 10 } })
    const r = identify(driven(held, 'current', [0.1, -0.1, 0.2, -0.2, 0.05], 0.05), knownOf(held))
    recovers(r.R, 16, 0.01)
    recovers(r.L, 0.0013, 0.03)
    expect(remedyOf(r.k_e)).toBe(RUNS.speeds)
    expect(remedyOf(r.J)).toBe(RUNS.acceleration)
  })

  it('cannot part friction from load when the joint turns one way', () => {
    const r = identify(driven(model, 'velocity', [0, 2, 4, 1, 5, 3], 0.1), knownOf(model))
    expect(r.J.kind).toBe('estimate')
    expect([r.tau_c, r.tau_load].map(remedyOf)).toEqual([RUNS.reversals, RUNS.reversals])
  })

  it('has no inertia from one steady speed', () => {
    const log = driven(model, 'velocity', [3], 0.6)
    const cut = (column: Float64Array | undefined): Float64Array => (column as Float64Array).subarray(3000)
    const r = identify(
      { time: cut(log.time), current: cut(log.current), voltage: cut(log.voltage), position: cut(log.position) },
      knownOf(model),
    )
    expect([r.J, r.b, r.tau_c, r.k_e].map((e) => e.kind)).toEqual(['refused', 'refused', 'refused', 'refused'])
  })

  it('has nothing from a joint at rest without current', () => {
    const r = identify(driven(model, 'velocity', [0], 0.2), knownOf(model))
    for (const e of [r.R, r.k_e, r.L, r.J, r.b, r.tau_c]) expect(e.kind).toBe('refused')
  })
})
