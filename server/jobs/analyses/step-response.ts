import type { StepFigures, StepTraces } from '../../../shared/contract/checks.ts'
import type { JointModel } from '../../control/model.ts'
import { simulate, type SimulationResult } from '../../control/simulation/simulate.ts'
import type { StepInputs } from './requests.ts'

/** Samples of a stored time history, at most. */
export const TRACE_POINTS = 400
const shortest = 0.2
const longest = 5
/** most current ticks of a check's own run: 5 s at 40 kHz */
const mostTicks = 200_000

/**
 * Length of the run, s: ten of the slowest time constant, so that the last fifth shows a limit cycle and not the rest of the approach.
 *
 * @param slowest  time constant at nominal values; a corner is run as long as the nominal joint
 */
export const windowOf = (model: JointModel, slowest: number | null): number => {
  const wanted = Math.min(longest, Math.max(shortest, Math.ceil(10 * (slowest ?? longest) * 20) / 20))
  return Math.min(wanted, mostTicks / model.firmware.f_c)
}

export interface StepRun {
  figures: StepFigures
  traces: StepTraces
}

/** Seven digits: more than a plot or a reader takes. */
const brief = (values: ArrayLike<number>): number[] => Array.from(values, (v) => Number(v.toPrecision(7)))

/**
 * The nonlinear step of a joint: clamps, friction, quantisation of encoder and current sensor kept.
 *
 * @throws NumericError from validation
 */
export function runStep(model: JointModel, step: StepInputs, windowS: number): StepRun {
  const result = simulate(model, {
    profile: 'step', step_to: step.to, theta_0: 0, t_end: windowS, encoder_quantised: true, current_quantised: true, tau_load: 0,
    backlash: step.backlash, source_resistance: step.source_resistance, trace_points: TRACE_POINTS - 2,
  })
  const { t, reference, theta, omega, i, u } = result.traces
  return { figures: figuresOf(result, step.to, windowS), traces: { t: brief(t), reference: brief(reference), theta: brief(theta), omega: brief(omega), i: brief(i), u: brief(u) } }
}

function figuresOf({ metrics, traces }: SimulationResult, stepTo: number, windowS: number): StepFigures {
  const { step } = metrics
  if (!step) throw new Error('a step run came back without step metrics')
  const signal = metrics.response === 'position' ? traces.theta : metrics.response === 'velocity' ? traces.omega : traces.i
  let low = Infinity
  let high = -Infinity
  for (let k = 0; k < signal.length; k += 1) {
    if (traces.t[k] < 0.8 * windowS) continue
    low = Math.min(low, signal[k])
    high = Math.max(high, signal[k])
  }
  return {
    response: metrics.response,
    stepTo,
    windowS,
    riseTimeS: step.riseTime.kind === 'time' ? step.riseTime.seconds : null,
    overshootPercent: step.overshoot * 100,
    settlingTimeS: step.settlingTime.kind === 'time' ? step.settlingTime.seconds : null,
    finalError: metrics.finalError,
    peakCurrentA: metrics.peakCurrent,
    rmsCurrentA: metrics.rmsCurrent,
    peakVoltageRequestV: metrics.peakVoltageRequest,
    peakSpeed: metrics.peakSpeed,
    rippleOfResponse: metrics.response === 'position' ? metrics.peakToPeakPosition : high - low,
    rippleOfPosition: metrics.peakToPeakPosition,
    rippleOfCurrentA: metrics.peakToPeakCurrent,
  }
}
