import { describe, expect, it } from 'vitest'
import { benchRun } from '../../../server/control/identification/bench-run.ts'
import { predictLog } from '../../../server/control/identification/predict-log.ts'
import { rigidJoint } from '../simulation/joints.ts'

const RUN = {
  run: {
    profile: 'samples' as const, times: [0, 0.3, 0.6], values: [0.5, -0.3, 0.2], theta_0: 0.1, t_end: 0.9,
    encoder_quantised: true, current_quantised: true, tau_load: 0, backlash: 0,
  },
  every: 5, seed: 11, currentNoise: 0.002, voltageNoise: 0.02, countPosition: true,
}

describe('prediction of a log from its own set-point', () => {
  it('meets a log of the same joint to within its noise', () => {
    const model = rigidJoint()
    const p = predictLog(model, benchRun(model, RUN))
    const errors = Object.fromEntries(p.comparisons.map((c) => [c.signal, c.normalisedRmsError ?? NaN]))
    // A count over 0.8 rad. The run began elsewhere within its count, so it meets the count's edges at other instants:
    // the ripple between them is what parts speed, current and voltage.
    expect(errors.position).toBeLessThan(5e-4)
    expect(errors.speed).toBeLessThan(1e-3)
    expect(errors.current).toBeLessThan(8e-3)
    expect(errors.voltage).toBeLessThan(8e-3)
    expect(p.startsMoving).toBe(false)
    expect(p.time.length).toBe(p.comparisons[0].predicted.length)
    expect(p.time.length).toBe(Math.floor((0.9 * model.firmware.f_c) / RUN.every))
  })

  it('shows a wrong inertia in speed and current', () => {
    const p = predictLog(rigidJoint({ plant: { J_load: 8e-4 } }), benchRun(rigidJoint(), RUN))
    const errors = Object.fromEntries(p.comparisons.map((c) => [c.signal, c.normalisedRmsError ?? NaN]))
    expect(errors.speed).toBeGreaterThan(0.01)
    expect(errors.current).toBeGreaterThan(0.01)
  })

  it('has no error relative to a span of nothing', () => {
    const model = rigidJoint()
    const log = benchRun(model, { ...RUN, run: { ...RUN.run, values: [0, 0, 0], theta_0: 0 }, currentNoise: 0 })
    const speed = predictLog(model, log).comparisons.find((c) => c.signal === 'speed')
    expect(speed).toMatchObject({ normalisedRmsError: null, rmsError: 0 })
  })

  it('refuses a log without a set-point', () => {
    const { set_point: _, ...log } = benchRun(rigidJoint(), RUN)
    expect(() => predictLog(rigidJoint(), log)).toThrow(expect.objectContaining({ code: 'bad-input' }))
  })
})
