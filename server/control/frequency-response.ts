import { CurrentTransfer } from './current-transfer.ts'
import { NumericError } from './errors.ts'
import { liftPlant } from './lifted-plant.ts'
import { guardNumber, type ControlMode, type JointModel } from './model.ts'
import { closuresOf } from './monodromy.ts'
import { outerSteps } from './outer-steps.ts'
import { LongResponse } from './long-source.ts'
import { SHORT_Q } from './outer-source.ts'
import { OuterTransfer } from './outer-transfer.ts'
import { sampleJoint } from './sampled-joint.ts'

/** More points than any plot shows. */
export const FREQUENCIES_LIMIT = 100_000

export interface FrequencyResponse {
  readonly loop: ControlMode
  readonly hz: Float64Array
  /** Broken loop. */
  readonly L_re: Float64Array
  readonly L_im: Float64Array
  /** Measured over reference. */
  readonly T_re: Float64Array
  readonly T_im: Float64Array
}

/**
 * Fundamental component of a loop, open and closed, loops inside it closed.
 *
 * @param hz  frequencies, Hz, each above 0
 * @throws    NumericError from validation; bad-input when the joint does not close the loop; too-large
 * @accuracy  1e-9 relative against control-cases.json (cases.test.ts)
 * @source    control-model.md §4
 */
export function frequencyResponse(model: JointModel, loop: ControlMode, hz: ArrayLike<number>): FrequencyResponse {
  return frequencyResponses(model, [loop], hz)[0]
}

/** As frequencyResponse, for several loops of one joint sampled once. */
export function frequencyResponses(model: JointModel, loops: readonly ControlMode[], hz: ArrayLike<number>): FrequencyResponse[] {
  if (hz.length > FREQUENCIES_LIMIT) {
    throw new NumericError('too-large', { field: 'hz', value: hz.length, limit: FREQUENCIES_LIMIT, text: `${hz.length} frequencies asked, at most ${FREQUENCIES_LIMIT} are computed; nothing was computed. Ask for fewer.` })
  }
  for (let k = 0; k < hz.length; k++) guardNumber(`hz[${k}]`, hz[k], 'positive')
  const joint = sampleJoint(model)
  const closed = closuresOf(joint.closes)
  for (const loop of loops) {
    if (!closed.includes(loop)) throw new NumericError('bad-input', { field: 'loop', value: loop, text: `The joint does not close a ${loop} loop; nothing was computed. It closes: ${closed.join(', ')}.` })
  }
  const responses = loops.map((loop) => emptyResponse(loop, hz))
  const steps = joint.closes === 'current' ? null : outerSteps(joint)
  const long = steps !== null && steps.q > SHORT_Q
  const outer = steps && !long ? new OuterTransfer(joint, liftPlant(steps)) : null
  const whole = new Map<ControlMode, LongResponse>()
  if (steps && long) for (const loop of loops) if (loop !== 'current') whole.set(loop, new LongResponse(joint, steps, loop))
  const current = new CurrentTransfer(joint)
  const point = { L_re: 0, L_im: 0, T_re: 0, T_im: 0 }
  const anyOuter = loops.some((loop) => loop !== 'current')
  for (let k = 0; k < hz.length; k++) {
    if (outer && anyOuter) outer.at(2 * Math.PI * hz[k] * joint.timing.T_o)
    for (const response of responses) {
      if (response.loop === 'current') {
        current.at(2 * Math.PI * hz[k] * joint.timing.T_c)
        current.fundamental(point)
      } else {
        outer?.fundamental(response.loop, point)
        whole.get(response.loop)?.at(2 * Math.PI * hz[k] * joint.timing.T_o, point)
      }
      response.L_re[k] = point.L_re
      response.L_im[k] = point.L_im
      response.T_re[k] = point.T_re
      response.T_im[k] = point.T_im
    }
  }
  return responses
}

function emptyResponse(loop: ControlMode, hz: ArrayLike<number>): FrequencyResponse {
  const row = (): Float64Array => new Float64Array(hz.length)
  return { loop, hz: Float64Array.from(hz), L_re: row(), L_im: row(), T_re: row(), T_im: row() }
}
