/** The nonlinear runs and the winding heat of reference-runs.json (its `source` says how they came about). */
import { describe, expect, it } from 'vitest'
import type { JointModel } from '../../../../server/control/model.ts'
import { simulate } from '../../../../server/control/simulation/simulate.ts'
import type { SimulationMetrics, SimulationOptions } from '../../../../server/control/simulation/simulate.ts'
import { steadyTemperature, timeToTemperature } from '../../../../server/control/simulation/winding-heat.ts'
import reference from './reference-runs.json'

function byName(m: SimulationMetrics): { [name: string]: number | null } {
  return {
    rise_time: m.step?.riseTime.kind === 'time' ? m.step.riseTime.seconds : null,
    overshoot: m.step?.overshoot ?? null,
    settling_time: m.step?.settlingTime.kind === 'time' ? m.step.settlingTime.seconds : null,
    final_error: m.finalError,
    peak_current: m.peakCurrent,
    rms_current: m.rmsCurrent,
    peak_voltage_request: m.peakVoltageRequest,
    peak_speed: m.peakSpeed,
    pp_position: m.peakToPeakPosition,
    pp_current: m.peakToPeakCurrent,
  }
}

describe('reference runs', () => {
  it.each(reference.nonlinear.map((run) => [`${run.id} ${run.note}`, run] as const))('%s', (_, run) => {
    const { metrics } = simulate(run as unknown as JointModel, run.simulation as SimulationOptions)
    const got = byName(metrics)
    for (const [name, { value, tol }] of Object.entries(run.expect)) {
      expect(Math.abs((got[name] ?? NaN) - value), `${name}: ${got[name]} for ${value}`).toBeLessThanOrEqual(tol)
      // Both are exact integrations of one definition; a thousandth of the stated tolerance leaves room for either's rounding.
      expect(Math.abs((got[name] ?? NaN) - value)).toBeLessThanOrEqual(1e-3 * tol)
    }
  })

  it.each(reference.thermal.map((heat) => [heat.id, heat] as const))('winding heat %s', (_, { inputs, expect: expected }) => {
    const node = { R: inputs.R_at_25C, R_th: inputs.R_th, tau_th: inputs.tau_th, T_amb: inputs.T_amb }
    const steady = steadyTemperature(node, inputs.I_continuous)
    if (expected.steady_temperature_C.value === null) expect(steady.kind).toBe('no steady temperature')
    else {
      expect(steady.kind).toBe('steady')
      if (steady.kind === 'steady') expect(Math.abs(steady.celsius - expected.steady_temperature_C.value)).toBeLessThan(1e-9)
    }
    const time = timeToTemperature(node, inputs.I_peak, inputs.T_max)
    expect(time.kind).toBe('time')
    if (time.kind === 'time') expect(Math.abs(time.seconds - expected.peak_current_time_s.value)).toBeLessThan(1e-6)
  })
})
