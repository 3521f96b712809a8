import { describe, expect, it } from 'vitest'
import { encoderCount } from '../../../server/control/plant.ts'
import { simulate } from '../../../server/control/simulation/simulate.ts'
import { appliedVoltage, busVoltage, requestLimit } from '../../../server/control/simulation/supply.ts'
import { aStep, compliantJoint, rigidJoint } from './joints.ts'

describe('simulation', () => {
  it('stays at rest for ever when nothing asks it to move', () => {
    const { metrics, switchings } = simulate(rigidJoint(), aStep({ step_to: 0.7, theta_0: 0.7, t_end: 0.2 }))
    expect(metrics).toMatchObject({ peakCurrent: 0, peakSpeed: 0, peakToPeakPosition: 0, peakVoltageRequest: 0, finalError: 0 })
    expect(switchings).toBe(0)
  })

  it('is the same shifted in angle, and mirrored when everything is', () => {
    const plain = simulate(rigidJoint(), aStep({ step_to: 0.25, tau_load: 0.004 }))
    const mirrored = simulate(rigidJoint(), aStep({ step_to: -0.25, tau_load: -0.004 }))
    expect(mirrored.metrics.peakCurrent).toBe(plain.metrics.peakCurrent)
    expect(mirrored.metrics.finalError).toBe(-plain.metrics.finalError)
    expect(mirrored.metrics.step?.riseTime).toEqual(plain.metrics.step?.riseTime)
    const shifted = simulate(rigidJoint(), aStep({ step_to: 2.25, theta_0: 2, tau_load: 0.004 }))
    expect(shifted.metrics.peakCurrent).toBeCloseTo(plain.metrics.peakCurrent, 10)
  })

  it('stops within a count of a quantised encoder and shows its last fifth', () => {
    const joint = rigidJoint()
    const { metrics } = simulate(joint, aStep({ step_to: 0.05, t_end: 0.6, encoder_quantised: true, current_quantised: true }))
    expect(Math.abs(metrics.finalError)).toBeLessThan(1.5 * encoderCount(joint.plant))
    expect(metrics.peakToPeakPosition).toBeLessThan(2 * encoderCount(joint.plant))
  })

  it('hunts when an integrator meets break-away friction', () => {
    const joint = rigidJoint({ plant: { tau_s: 0.06 }, firmware: { K_ip: 600 } })
    const { metrics, switchings } = simulate(joint, aStep({ step_to: 0.02, t_end: 2 }))
    expect(switchings).toBeGreaterThan(6)
    expect(metrics.peakToPeakPosition).toBeGreaterThan(1e-4)
  })

  it('keeps the reported current within the peak it plots', () => {
    const result = simulate(rigidJoint(), aStep({ step_to: 0.8, trace_points: 200 }))
    expect(result.traces.t.length).toBeLessThanOrEqual(202)
    expect(Math.max(...result.traces.i.map(Math.abs))).toBe(result.metrics.peakCurrent)
    expect(Math.max(...result.traces.u.map(Math.abs))).toBe(result.metrics.peakVoltageRequest)
    expect(result.traces.t[0]).toBe(0)
    expect(result.traces.t[result.traces.t.length - 1]).toBeCloseTo(0.3, 12)
    expect([...result.traces.t].every((t, k, all) => k === 0 || t > all[k - 1])).toBe(true)
    const whole = simulate(rigidJoint(), aStep({ step_to: 0.8, trace_points: 1e6 }))
    expect(whole.traces.t.length).toBe(4501)
    expect(whole.metrics).toEqual(result.metrics)
  })

  it('follows a trapezoid with less error than the same distance in one step', () => {
    const base = { theta_0: 0, t_end: 0.6, encoder_quantised: false, current_quantised: false, tau_load: 0, backlash: 0 }
    const ramp = simulate(rigidJoint(), { ...base, profile: 'trapezoid', step_to: 0.5, rate_limit: 2, acceleration_limit: 40 })
    const step = simulate(rigidJoint(), { ...base, profile: 'step', step_to: 0.5 })
    expect(ramp.metrics.peakCurrent).toBeLessThan(step.metrics.peakCurrent / 2)
    expect(ramp.metrics.peakError).toBeLessThan(0.1)
    expect(step.metrics.peakError).toBe(0.5)
    expect(ramp.metrics.step?.settlingTime.kind).toBe('time')
  })

  it('has no step figures for a sine or a log, and follows the log as it follows the sine', () => {
    const base = { theta_0: 0, t_end: 0.3, encoder_quantised: false, current_quantised: false, tau_load: 0, backlash: 0 }
    const sine = simulate(rigidJoint(), { ...base, profile: 'sine', amplitude: 0.1, frequency: 5 })
    expect(sine.metrics.step).toBeNull()
    const times = Array.from({ length: 1201 }, (_, k) => k / 4000)
    const values = times.map((t) => 0.1 * Math.sin(10 * Math.PI * t))
    const log = simulate(rigidJoint(), { ...base, profile: 'samples', times, values })
    expect(log.metrics.rmsCurrent).toBeCloseTo(sine.metrics.rmsCurrent, 9)
  })

  it('reaches a lower speed on a supply that sags', () => {
    const fast = aStep({ step_to: 1.5, t_end: 0.4 })
    const joint = rigidJoint({ firmware: { omega_max: 50 }, V_bus: 7 })
    const stiff = simulate(joint, fast)
    const soft = simulate(joint, { ...fast, source_resistance: 12 })
    expect(soft.metrics.peakSpeed).toBeLessThan(stiff.metrics.peakSpeed - 0.01)
    expect(simulate(joint, { ...fast, source_resistance: 0 }).metrics).toEqual(stiff.metrics)
  })

  it.each([
    ['simulation.t_end', 'out-of-range', () => simulate(rigidJoint(), aStep({ t_end: 0 }))],
    ['simulation.t_end', 'too-large', () => simulate(rigidJoint(), aStep({ t_end: 1e4 }))],
    ['simulation.theta_0', 'not-finite', () => simulate(rigidJoint(), aStep({ theta_0: NaN }))],
    ['simulation.backlash', 'bad-input', () => simulate(rigidJoint(), aStep({ backlash: 0.01 }))],
    ['simulation.backlash', 'out-of-range', () => simulate(compliantJoint(), aStep({ backlash: -0.01 }))],
    ['plant.L', 'not-finite', () => simulate(rigidJoint({ plant: { L: NaN } }), aStep())],
    ['firmware.f_o', 'rates-refused', () => simulate(rigidJoint({ firmware: { f_o: 3999.7 } }), aStep())],
  ])('refuses %s: %s', (field, code, run) => {
    expect(run).toThrow(expect.objectContaining({ code, details: expect.objectContaining({ field }) }))
  })
})

describe('supply', () => {
  const supply = { V_bus: 12, V_nom: 12, compensated: true, d_max: 0.9, source_resistance: 2 }

  it('drops by its resistance times duty times current, so that power balances', () => {
    const V = busVoltage(supply, 6, 1.5)
    // Drawn from the bus: V·(12 − V)/R_s; taken by the motor: 6 V · 1.5 A.
    expect((V * (12 - V)) / 2).toBeCloseTo(9, 12)
    expect(appliedVoltage(supply, 6, V)).toBe(6)
  })

  it('meets the duty limit when the request exceeds what is left', () => {
    const V = busVoltage(supply, 20, 1.5)
    expect(V).toBeCloseTo(12 - 2 * 0.9 * 1.5, 12)
    expect(appliedVoltage(supply, 20, V)).toBeCloseTo(0.9 * V, 12)
    expect(requestLimit(supply, V)).toBeCloseTo(0.9 * V, 12)
  })

  it('does not rise when the motor brakes, and scales an uncompensated request', () => {
    expect(busVoltage(supply, 6, -1.5)).toBe(12)
    const plain = { ...supply, compensated: false }
    expect(busVoltage(plain, 6, 1)).toBeCloseTo(11, 12)
    expect(appliedVoltage(plain, 6, 11)).toBeCloseTo(5.5, 12)
    expect(requestLimit(plain, 11)).toBeCloseTo(10.8, 12)
  })
})
