import { describe, expect, it } from 'vitest'
import type { HeatFigures } from '../../../shared/contract/checks.ts'
import type { Situation } from './a-context.ts'
import { aContext, aLoop, aStep, aSweep, findingsAbout, levelOf } from './a-context.ts'
import { jointFindings } from '../../../server/modules/checks/findings/joint-findings.ts'

/** One count of a 14-bit encoder on the output, rad. */
const count = (2 * Math.PI) / 2 ** 14
const aHeat = (edit: Partial<HeatFigures> = {}): HeatFigures => ({ nodes: 2, ambientCelsius: 25, limitCelsius: 120, continuousCurrentA: 2, continuousA: 1, steadyCelsius: 60, steadyReads: '', peakA: 1.8, timeAtPeakS: 40, timeAtPeakReads: '', ...edit })
const tolerance = (velocity: Partial<NonNullable<ReturnType<typeof aSweep>['loops']['velocity']>>): Situation => ({ figures: { tolerance: aSweep({ loops: { ...aSweep().loops, velocity: { ...aSweep().loops.velocity!, ...velocity } } }) } })
const at = (value: number) => ({ value, at: aSweep().worstVertex })

/** Each row: kind, situation, loop, level. Limits are the defaults of the policy table. */
const rows: [kind: string, what: string, situation: Situation, loop: string | undefined, level: string][] = [
  ['closed loop', 'stable', {}, undefined, 'pass'],
  ['closed loop', 'unstable', { figures: { verdict: 'unstable', rho: 1.01, step: null } }, undefined, 'block'],
  ['closed loop', 'on the boundary counts as unstable', { figures: { verdict: 'on the boundary', rho: 1, step: null } }, undefined, 'block'],
  ['closed loop', 'nothing computed', { figures: null }, undefined, 'no finding'],
  ['closed loop over the tolerances', 'not swept yet', {}, undefined, 'no finding'],
  ['closed loop over the tolerances', 'all stable', { figures: { tolerance: aSweep() } }, undefined, 'pass'],
  ['closed loop over the tolerances', 'one vertex unstable', { figures: { tolerance: aSweep({ vertices: { points: 4, stable: 3, boundary: 0, unstable: 1 } }) } }, undefined, 'block'],
  ['closed loop over the tolerances', 'one vertex on the boundary', { figures: { tolerance: aSweep({ vertices: { points: 4, stable: 3, boundary: 1, unstable: 0 } }) } }, undefined, 'block'],
  ['closed loop over the tolerances', 'one sample unstable', { figures: { tolerance: aSweep({ samples: { points: 256, stable: 255, boundary: 0, unstable: 1 } }) } }, undefined, 'block'],

  ['phase margin', 'at 45°', { loops: { velocity: aLoop({ phaseMarginDeg: 45 }) } }, 'velocity', 'pass'],
  ['phase margin', 'below 45°', { loops: { velocity: aLoop({ phaseMarginDeg: 44.99 }) } }, 'velocity', 'concession needed'],
  ['phase margin', 'at 30°', { loops: { velocity: aLoop({ phaseMarginDeg: 30 }) } }, 'velocity', 'concession needed'],
  ['phase margin', 'below 30°', { loops: { velocity: aLoop({ phaseMarginDeg: 29.99 }) } }, 'velocity', 'block'],
  ['phase margin', 'none up to 180°', { loops: { velocity: aLoop({ phaseMarginDeg: null, phaseMarginReads: 'none up to 180°' }) } }, 'velocity', 'pass'],
  ['phase margin', 'a loop unstable by itself', { loops: { velocity: aLoop({ verdict: 'unstable', phaseMarginDeg: null, phaseMarginReads: 'unstable' }) } }, 'velocity', 'block'],
  ['worst phase margin', 'at 35°', tolerance({ phaseMarginDeg: at(35) }), 'velocity', 'pass'],
  ['worst phase margin', 'below 35°', tolerance({ phaseMarginDeg: at(34.99) }), 'velocity', 'concession needed'],
  ['worst phase margin', 'below 30°', tolerance({ phaseMarginDeg: at(29.99) }), 'velocity', 'block'],
  ['worst phase margin', 'a loop unstable by itself somewhere', tolerance({ unstable: 1 }), 'velocity', 'block'],
  ['worst phase margin', 'none anywhere', tolerance({ phaseMarginDeg: null }), 'velocity', 'pass'],
  ['gain margin', 'at 8 dB', { loops: { position: aLoop({ gainMarginDb: 8 }) } }, 'position', 'pass'],
  ['gain margin', 'below 8 dB', { loops: { position: aLoop({ gainMarginDb: 7.99 }) } }, 'position', 'concession needed'],
  ['gain margin', 'above 60 dB', { loops: { position: aLoop({ gainMarginDb: null, gainMarginReads: 'above 60 dB' }) } }, 'position', 'pass'],
  ['worst gain margin', 'at 6 dB', tolerance({ gainMarginDb: at(6) }), 'velocity', 'pass'],
  ['worst gain margin', 'below 6 dB', tolerance({ gainMarginDb: at(5.99) }), 'velocity', 'concession needed'],
  ['sensitivity peak', 'at 1.7', { loops: { velocity: aLoop({ sensitivityPeak: 1.7 }) } }, 'velocity', 'pass'],
  ['sensitivity peak', 'above 1.7', { loops: { velocity: aLoop({ sensitivityPeak: 1.701 }) } }, 'velocity', 'advise'],
  ['sensitivity peak', 'above 2.0', { loops: { velocity: aLoop({ sensitivityPeak: 2.001 }) } }, 'velocity', 'concession needed'],
  ['separation', 'a ratio of 4', { loops: { velocity: aLoop({ bandwidthHz: 40 }), position: aLoop({ bandwidthHz: 10 }) } }, 'position', 'pass'],
  ['separation', 'below 4', { loops: { velocity: aLoop({ bandwidthHz: 39.9 }), position: aLoop({ bandwidthHz: 10 }) } }, 'position', 'advise'],
  ['separation', 'below 2.5', { loops: { velocity: aLoop({ bandwidthHz: 24.9 }), position: aLoop({ bandwidthHz: 10 }) } }, 'position', 'concession needed'],
  ['separation', 'no bandwidth to compare', { loops: { position: aLoop({ bandwidthHz: null }) } }, 'position', 'no finding'],
  ['outer rate over bandwidth', '20 times', { loops: { velocity: aLoop({ bandwidthHz: 100 }) } }, undefined, 'pass'],
  ['outer rate over bandwidth', 'below 20', { loops: { velocity: aLoop({ bandwidthHz: 100.1 }) } }, undefined, 'advise'],
  // 360°·f_x·1.5/16000 = 36° at 1066.67 Hz
  ['dead time', 'just under 36°', { loops: { current: aLoop({ phaseMarginHz: 1066.6 }) } }, undefined, 'pass'],
  ['dead time', 'just over 36°', { loops: { current: aLoop({ phaseMarginHz: 1066.7 }) } }, undefined, 'advise'],
  ['dead time', 'no crossover', { loops: { current: aLoop({ phaseMarginHz: null }) } }, undefined, 'no finding'],
  ['window delay', 'is told without a limit', {}, undefined, 'pass'],
  // (K_pv + K_iv·T_o)·lsb/(W·T_o) with W·T_o = 5 ms: (K_pv + 0.005)·0.0767 A
  ['quantum ripple', 'under 5 % of the limit', { firmware: { K_pv: 1.168 }, roles: { 'current.limit': 1.8 } }, undefined, 'pass'],
  ['quantum ripple', 'over 5 % of the limit', { firmware: { K_pv: 1.17 }, roles: { 'current.limit': 1.8 } }, undefined, 'advise'],
  ['PWM step', 'no counts in the firmware', {}, undefined, 'no finding'],
  // 12 V/5000/1.2 Ω = 2 mA, the sensor's step: not finer
  ['PWM step', 'as coarse as the sensor', { roles: { 'pwm.counts': 5000 } }, undefined, 'advise'],
  ['PWM step', 'finer', { roles: { 'pwm.counts': 5001 } }, undefined, 'pass'],

  ['current against driver', 'no rating', {}, undefined, 'no finding'],
  ['current against driver', 'the limit at its rating', { driveTrain: { I_driver: 1.8 } }, undefined, 'pass'],
  ['current against driver', 'the limit above', { driveTrain: { I_driver: 1.79 } }, undefined, 'block'],
  ['current against sensor', 'the simulated peak above', { driveTrain: { I_sense: 1.9 }, figures: { step: aStep({ peakCurrentA: 1.95 }) } }, undefined, 'block'],
  ['current against magnets', 'the peak of the worst corner above', { driveTrain: { I_demagnetisation: 1.9 }, figures: { tolerance: aSweep({ peakCurrentA: at(1.95) }) } }, undefined, 'block'],
  ['current against magnets', 'within', { driveTrain: { I_demagnetisation: 1.9 } }, undefined, 'pass'],
  // 150·0.012·1.8 = 3.24 N·m
  ['torque against gear', 'at its rating', { driveTrain: { tau_gear: 3.24 } }, undefined, 'pass'],
  ['torque against gear', 'above', { driveTrain: { tau_gear: 3.23 } }, undefined, 'concession needed'],
  ['torque against gear', 'the strongest motor counts', { driveTrain: { tau_gear: 3.24, k_t: { value: 0.012, low: 0.0112, high: 0.0128 } } }, undefined, 'concession needed'],

  ['winding temperature', 'no thermal data', {}, undefined, 'no finding'],
  ['winding temperature', 'ten kelvin in hand', { figures: { heat: aHeat({ steadyCelsius: 110 }) } }, undefined, 'pass'],
  ['winding temperature', 'less', { figures: { heat: aHeat({ steadyCelsius: 110.1 }) } }, undefined, 'concession needed'],
  ['winding temperature', 'no steady temperature', { figures: { heat: aHeat({ steadyCelsius: null, steadyReads: 'no steady temperature' }) } }, undefined, 'concession needed'],
  ['winding temperature', 'no continuous limit', { figures: { heat: aHeat({ continuousA: null }) } }, undefined, 'no finding'],
  ['time at peak current', 'one node', { figures: { heat: aHeat({ nodes: 1 }) } }, undefined, 'advise'],
  ['time at peak current', 'no thermal data', {}, undefined, 'advise'],
  ['time at peak current', 'longer than the duty', { driveTrain: { peak_duty: 40 }, figures: { heat: aHeat() } }, undefined, 'pass'],
  ['time at peak current', 'shorter', { driveTrain: { peak_duty: 40.1 }, figures: { heat: aHeat() } }, undefined, 'advise'],
  ['time at peak current', 'for ever', { driveTrain: { peak_duty: 40 }, figures: { heat: aHeat({ timeAtPeakS: null, timeAtPeakReads: 'never reaches the limit' }) } }, undefined, 'pass'],

  // 0.95·12 V over 150·0.012 V·s/rad without friction: 6.333 rad/s
  ['reachable speed', 'reached', { roles: { 'speed.limit': 6.33 } }, undefined, 'pass'],
  ['reachable speed', 'not reached', { roles: { 'speed.limit': 6.34 } }, undefined, 'advise'],
  ['reachable speed', 'not at the lowest supply', { roles: { 'speed.limit': 6.33 }, driveTrain: { V_bus: { value: 12, low: 11.9, high: 13 } } }, undefined, 'advise'],
  // W·T_o = 5 ms: half a turn at 628.3 rad/s
  ['window turns', 'under half a turn', { roles: { 'speed.limit': 628 } }, undefined, 'pass'],
  ['window turns', 'half a turn', { roles: { 'speed.limit': 628.4 } }, undefined, 'block'],
  ['window turns', 'an encoder on the motor turns N times as fast', { roles: { 'speed.limit': 4.2 }, driveTrain: { encoder: 'motor' } }, undefined, 'block'],
  ['window turns', 'in current mode nothing is measured', { firmware: { mode: 'current' } }, undefined, 'no finding'],

  ['overshoot', 'at 15 %', { figures: { step: aStep({ overshootPercent: 15 }) } }, undefined, 'pass'],
  ['overshoot', 'above', { figures: { step: aStep({ overshootPercent: 15.1 }) } }, undefined, 'advise'],
  ['overshoot', 'no step', { figures: { step: null } }, undefined, 'no finding'],
  ['settling', 'no target', {}, undefined, 'no finding'],
  ['settling', 'at the target', { driveTrain: { settling_target: 0.15 } }, undefined, 'pass'],
  ['settling', 'later', { driveTrain: { settling_target: 0.149 } }, undefined, 'advise'],
  ['settling', 'never', { driveTrain: { settling_target: 0.149 }, figures: { step: aStep({ settlingTimeS: null }) } }, undefined, 'advise'],
  ['final error', 'two counts', { figures: { step: aStep({ finalError: -2 * count }) } }, undefined, 'pass'],
  ['final error', 'more', { figures: { step: aStep({ finalError: -2.01 * count }) } }, undefined, 'advise'],
  ['limit cycle', 'two counts', { figures: { step: aStep({ rippleOfResponse: 2 * count }) } }, undefined, 'pass'],
  ['limit cycle', 'more', { figures: { step: aStep({ rippleOfResponse: 2.01 * count }) } }, undefined, 'concession needed'],
  ['limit cycle', 'backlash on a rigid joint', { driveTrain: { backlash: 0.01 } }, undefined, 'concession needed'],
  ['limit cycle', 'backlash on a compliant joint is simulated', { driveTrain: { backlash: 0.01, k_s: 100, d_s: 0.1 } }, undefined, 'pass'],

  ['braking', 'no capacitance', { driveTrain: { V_bus_max: 20 } }, undefined, 'no finding'],
  // ½·(0.004 + 150²·6e-7)·16 = 0.14 J into 1 mF from 12 V: 20.59 V
  ['braking', 'borne', { driveTrain: { V_bus_max: 20.6, C_bus: 0.001 } }, undefined, 'pass'],
  ['braking', 'not borne', { driveTrain: { V_bus_max: 20.5, C_bus: 0.001 } }, undefined, 'advise'],
  ['braking', 'an inertia beyond every number', { driveTrain: { V_bus_max: 20.5, C_bus: 0.001, J_load: 1.7e308 } }, undefined, 'block'],

  ['bus watchdog', 'on', {}, undefined, 'pass'],
  ['bus watchdog', 'off', { roles: { 'bus.watchdog': 0 } }, undefined, 'concession needed'],
  ['bus watchdog', 'a switch that is off', { roles: { 'bus.watchdog': false } }, undefined, 'concession needed'],
  ['bus watchdog', 'none in the firmware', { roles: { 'bus.watchdog': null } }, undefined, 'no finding'],
  ['soft position limits', 'no stops given', { roles: { 'position.min': -1, 'position.max': 1 } }, undefined, 'no finding'],
  ['soft position limits', 'on the stops', { roles: { 'position.min': -1, 'position.max': 1 }, driveTrain: { theta_stop_min: -1, theta_stop_max: 1 } }, undefined, 'pass'],
  ['soft position limits', 'past the upper stop', { roles: { 'position.min': -1, 'position.max': 1.01 }, driveTrain: { theta_stop_min: -1, theta_stop_max: 1 } }, undefined, 'block'],
  ['soft position limits', 'crossed', { roles: { 'position.min': 1, 'position.max': 1 } }, undefined, 'block'],
]

describe('findings at their limits', () => {
  it.each(rows)('%s: %s', (kind, _what, situation, loop, level) => {
    expect(levelOf(kind, situation, loop)).toBe(level)
  })

  it('says nothing worse than pass of a joint that is within policy, but that its thermal data are missing', () => {
    const found = jointFindings(aContext({ figures: { tolerance: aSweep() } })).filter((f) => f.level !== 'pass')
    expect(found.map((f) => f.kind)).toEqual(['time at peak current'])
    expect(found[0].text).toBe('not assessed: thermal data missing.')
  })

  it('has a remedy and a place to blame for whatever is not a pass, and none for a pass', () => {
    for (const [, , situation] of rows)
      for (const f of jointFindings(aContext(situation))) {
        expect(f.remedy === '', `${f.kind}: ${f.remedy}`).toBe(f.level === 'pass')
        expect(f.text).toMatch(/\.$/)
        expect(f.source).not.toBe('')
        if (f.level !== 'pass') expect(f.pointer).toMatch(/^\/values\//)
      }
  })

  it('names what a one-node winding hides', () => {
    const [f] = findingsAbout('time at peak current', { figures: { heat: aHeat({ nodes: 1 }) } })
    expect(f.text).toContain('not assessed: winding time constant missing')
    expect(f.value).toBeNull()
  })

  it('names the corner and what was covered', () => {
    const [f] = findingsAbout('worst gain margin', tolerance({ gainMarginDb: at(5.5) }), 'velocity')
    expect(f).toMatchObject({ value: 5.5, limit: 6, unit: 'dB' })
    expect(f.text).toBe("The velocity loop's gain margin is 5.5 dB at the worst of 4 corners and 64 samples: k_t +6.7 %, η 0.75.")
  })

  it('says that a gear of low efficiency is not driven back', () => {
    const bounds = [{ name: 'eta', unit: '', nominal: 0.4, low: 0.4, high: 1 }]
    expect(findingsAbout('closed loop over the tolerances', { figures: { tolerance: aSweep({ bounds }) } })[0].text).toContain('not driven back')
  })
})

describe('directions against what was recorded for the board', () => {
  const recorded = (encoder: string, motor: string) => ({ board: 'HB-1', role: (role: string) => (role === 'encoder.direction' ? encoder : role === 'motor.direction' ? motor : null) })
  const now: Situation = { roles: { 'encoder.direction': 'forward', 'motor.direction': 'forward' }, board: 'HB-1' }
  it.each([
    ['as recorded', { ...now, recorded: recorded('forward', 'forward') }, 'pass'],
    ['the encoder turned', { ...now, recorded: recorded('reverse', 'forward') }, 'block'],
    ['the motor turned', { ...now, recorded: recorded('forward', 'reverse') }, 'block'],
    ['another board', { ...now, board: 'HB-2', recorded: recorded('reverse', 'forward') }, 'no finding'],
    ['nothing recorded', now, 'no finding'],
  ] as [string, Situation, string][])('%s', (_what, situation, level) => expect(levelOf('directions', situation)).toBe(level))
})
