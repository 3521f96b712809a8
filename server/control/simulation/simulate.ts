/** The joint's response in time, with everything the linear model drops. control-model.md §6. */
import { NumericError } from '../errors.ts'
import { guardNumber, validateJointModel } from '../model.ts'
import type { Firmware, JointModel } from '../model.ts'
import { encoderCount } from '../plant.ts'
import { timingOf } from '../timing.ts'
import { Drive } from './drive.ts'
import { runFirmware } from './firmware-run.ts'
import { lastFifthFrom, peakMagnitude, peakToPeak, rootMeanSquare, stepMetrics } from './metrics.ts'
import type { StepMetrics } from './metrics.ts'
import { referenceOf } from './profiles.ts'
import type { Profile } from './profiles.ts'
import { decimate } from './traces.ts'
import type { Record, Traces } from './traces.ts'

/** Everything but the joint; the vectors' `simulation` object has this form. SI. */
export type SimulationOptions = Profile & {
  /** Output angle at rest before t = 0, rad. */
  theta_0: number
  /** Length of the run, s. */
  t_end: number
  encoder_quantised: boolean
  current_quantised: boolean
  /** Load torque at the output against positive motion, N·m. */
  tau_load: number
  /** Whole gap between the teeth, rad; compliant joints only. */
  backlash: number
  /** Resistance between the supply's open-circuit voltage and the bus, Ω. */
  source_resistance?: number
  /** Samples kept for plots, about; 1200 by default, 0 for none. */
  trace_points?: number
}

export interface SimulationMetrics {
  /** The true signal that the closed mode commands. */
  response: 'position' | 'velocity' | 'current'
  /** Null when the profile is no step to one final value (sine, samples). */
  step: StepMetrics | null
  /** Reference minus response: mean over the last fifth, largest and root mean square over the run. */
  finalError: number
  peakError: number
  rmsError: number
  peakCurrent: number
  rmsCurrent: number
  /** Largest request |u|, V, before its clamp. */
  peakVoltageRequest: number
  peakSpeed: number
  /** Peak to peak over the last fifth: a limit cycle shows here. rad, A. */
  peakToPeakPosition: number
  peakToPeakCurrent: number
}

export interface SimulationResult {
  metrics: SimulationMetrics
  traces: Traces
  /** Current ticks run, and how often friction stuck or let go or the gear's teeth met or parted. */
  ticks: number
  switchings: number
}

/** Most current ticks of one run: 20 s at 100 kHz. */
export const MAX_TICKS = 2_000_000

/**
 * Simulates a joint under its firmware for a set-point profile.
 *
 * Event-driven over the ticks of both tasks; between ticks exact exponentials of the piecewise linear drive train,
 * its switchings (stick, slip, backlash contact) located as roots of Taylor polynomials.
 *
 * @param model    plant, firmware and environment, SI
 * @param options  profile and disturbances; start at rest at `theta_0`, window filled with the first sample
 * @returns        metrics at the current ticks on the true signals, and decimated traces
 * @throws         NumericError not-finite, out-of-range, rates-refused, too-large, bad-input (names the field)
 * @accuracy       integration error below 1e-10 of each state's range against a Runge–Kutta run (simulate.test.ts)
 * @source         control-model.md §2, §6
 */
export function simulate(model: JointModel, options: SimulationOptions): SimulationResult {
  const { record, switchings } = simulateEveryTick(model, options)
  const metrics = metricsOf(record, model.firmware.mode, options)
  guardFinite(metrics)
  return {
    metrics,
    traces: decimate(record, options.trace_points ?? 1200),
    ticks: record.count,
    switchings,
  }
}

/** @throws NumericError not-finite where a signal has left the range of numbers */
function guardFinite(metrics: SimulationMetrics): void {
  const { riseTime, settlingTime, overshoot, peak } = metrics.step ?? { riseTime: { kind: 'not reached' as const }, settlingTime: { kind: 'does not settle' as const }, overshoot: 0, peak: 0 }
  const times = [riseTime, settlingTime].map((t) => (t.kind === 'time' ? t.seconds : 0))
  const figures = [...Object.entries(metrics), ['overshoot', overshoot], ['peak', peak], ['times', times[0] + times[1]]] as [string, unknown][]
  for (const [field, value] of figures) {
    if (typeof value !== 'number' || Number.isFinite(value)) continue
    throw new NumericError('not-finite', { field: `simulation.${field}`, value, text: `The simulated response left the range of numbers (${field} is ${value}); nothing of it was kept. Check the gains and the units of the drive train.` })
  }
}

/** As simulate, with the signals at every current tick and no figures. */
export function simulateEveryTick(model: JointModel, options: SimulationOptions): { record: Record; switchings: number } {
  const { plant, firmware } = model
  const count = checked(model, options)
  const { p, q } = timingOf(firmware.f_c, firmware.f_o)
  const record: Record = { count, T_c: 1 / firmware.f_c, ...buffers(count) }
  const drive = new Drive({
    plant,
    T_winding: model.environment.T_winding,
    theta_0: options.theta_0,
    tau_load: options.tau_load,
    tau_c: plant.tau_c,
    tau_s: plant.tau_s ?? plant.tau_c,
    backlash: options.backlash,
    unit: 1 / (firmware.f_c * q),
  })
  const reference = referenceOf(options, firmware.mode === 'position' ? options.theta_0 : 0)
  runFirmware(
    {
      firmware,
      drive,
      reference,
      p,
      q,
      supply: {
        V_bus: model.environment.V_bus,
        V_nom: plant.V_nom,
        compensated: firmware.supply_compensated,
        d_max: firmware.d_max,
        source_resistance: options.source_resistance ?? 0,
      },
      encoderOnMotor: plant.encoder === 'motor',
      encoderStep: options.encoder_quantised ? encoderCount(plant) : 0,
      currentStep: options.current_quantised ? plant.i_lsb : 0,
      sensorDelay: firmware.sensor_delay ?? 0,
      outerDelay: firmware.outer_delay ?? 0,
    },
    record,
  )
  return { record, switchings: drive.switchings }
}

function buffers(count: number): Omit<Record, 'count' | 'T_c'> {
  const make = (): Float64Array => new Float64Array(count)
  return { reference: make(), theta: make(), omega: make(), i: make(), u: make(), v: make() }
}

function metricsOf(record: Record, mode: Firmware['mode'], options: SimulationOptions): SimulationMetrics {
  const { count, T_c, reference, theta, omega, i, u } = record
  const y = mode === 'position' ? theta : mode === 'velocity' ? omega : i
  const lastFifth = lastFifthFrom(count, options.t_end / T_c)
  let sum = 0
  let peakError = 0
  let squares = 0
  for (let k = 0; k < count; k++) {
    const e = reference[k] - y[k]
    if (k >= lastFifth) sum += e
    if (Math.abs(e) > peakError) peakError = Math.abs(e)
    squares += e * e
  }
  const stepped = options.profile === 'step' || options.profile === 'trapezoid'
  const from = mode === 'position' ? options.theta_0 : 0
  return {
    response: mode,
    step: stepped ? stepMetrics({ response: y, dt: T_c, from, to: options.step_to, lastFifth }) : null,
    finalError: sum / (count - lastFifth),
    peakError,
    rmsError: Math.sqrt(squares / count),
    peakCurrent: peakMagnitude(i),
    rmsCurrent: rootMeanSquare(i),
    peakVoltageRequest: peakMagnitude(u),
    peakSpeed: peakMagnitude(omega),
    peakToPeakPosition: peakToPeak(theta, lastFifth),
    peakToPeakCurrent: peakToPeak(i, lastFifth),
  }
}

/** Guards all input; returns the number of current ticks from 0 to t_end, both included. */
function checked(model: JointModel, options: SimulationOptions): number {
  validateJointModel(model)
  guardNumber('simulation.theta_0', options.theta_0, 'any')
  guardNumber('simulation.t_end', options.t_end, 'positive')
  guardNumber('simulation.tau_load', options.tau_load, 'any')
  guardNumber('simulation.backlash', options.backlash, 'not-negative')
  guardNumber('simulation.source_resistance', options.source_resistance ?? 0, 'not-negative')
  guardNumber('simulation.trace_points', options.trace_points ?? 0, 'not-negative')
  if (options.backlash > 0 && model.plant.k_s === null) {
    throw new NumericError('bad-input', {
      field: 'simulation.backlash',
      value: options.backlash,
      text: 'Backlash acts through the gear\'s stiffness, and this joint is rigid; nothing was computed. Give k_s and d_s, or set the backlash to 0.',
    })
  }
  const count = Math.floor(options.t_end * model.firmware.f_c + 1e-6) + 1
  if (count > MAX_TICKS) {
    throw new NumericError('too-large', {
      field: 'simulation.t_end',
      value: options.t_end,
      limit: MAX_TICKS / model.firmware.f_c,
      text: `The run has ${count} current ticks, more than ${MAX_TICKS}; nothing was computed. Shorten it to ${MAX_TICKS / model.firmware.f_c} s.`,
    })
  }
  return count
}
