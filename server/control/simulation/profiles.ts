/** Set-point profiles: what the task is asked to follow. Units are the closed mode's own: rad, rad/s or A. */
import { NumericError } from '../errors.ts'
import { guardNumber } from '../model.ts'

export type Profile =
  /** The reference is `step_to` from t = 0 on. */
  | { profile: 'step'; step_to: number }
  /** From rest to `step_to` with limited rate and limited rate of rate (per s, per s²). */
  | { profile: 'trapezoid'; step_to: number; rate_limit: number; acceleration_limit: number }
  /** `amplitude`·sin(2π·`frequency`·t) about the start. */
  | { profile: 'sine'; amplitude: number; frequency: number }
  /** A log's own set-point, each value held until the next; the first holds from t = 0, the last to the end. */
  | { profile: 'samples'; times: ArrayLike<number>; values: ArrayLike<number> }

/** Reference at time t, asked in rising order of t. */
export type Reference = (t: number) => number

/**
 * The reference of a profile as a function of time.
 *
 * @param profile  what to follow
 * @param start    the signal's value at rest before t = 0
 * @throws         NumericError not-finite, out-of-range, bad-input (names the value)
 */
export function referenceOf(profile: Profile, start: number): Reference {
  switch (profile.profile) {
    case 'step': {
      const to = finite('step_to', profile.step_to)
      return () => to
    }
    case 'trapezoid':
      return trapezoid(start, profile)
    case 'sine': {
      const amplitude = finite('amplitude', profile.amplitude)
      const omega = 2 * Math.PI * positive('frequency', profile.frequency)
      return (t) => start + amplitude * Math.sin(omega * t)
    }
    case 'samples':
      return samples(profile.times, profile.values)
  }
}

function trapezoid(start: number, profile: Extract<Profile, { profile: 'trapezoid' }>): Reference {
  const distance = finite('step_to', profile.step_to) - start
  const sign = Math.sign(distance)
  const length = Math.abs(distance)
  const acceleration = positive('acceleration_limit', profile.acceleration_limit)
  const rate = Math.min(positive('rate_limit', profile.rate_limit), Math.sqrt(length * acceleration))
  if (length === 0) return () => start
  const rampTime = rate / acceleration
  const end = length / rate + rampTime
  return (t) => {
    if (t >= end) return profile.step_to
    const fromNearerEnd = Math.max(0, Math.min(t, end - t))
    const covered =
      fromNearerEnd < rampTime
        ? (acceleration * fromNearerEnd * fromNearerEnd) / 2
        : rate * (fromNearerEnd - rampTime / 2)
    return start + sign * (t < end / 2 ? covered : length - covered)
  }
}

/** Times are met to a nanosecond, so that a log's clock and the task's agree on the tick that carries a new value. */
const SAME_INSTANT = 1e-9

function samples(times: ArrayLike<number>, values: ArrayLike<number>): Reference {
  const n = times.length
  if (n === 0 || values.length !== n) throw new NumericError('bad-input', { field: 'set-point', text: `The set-point needs one value for each time, got ${values.length} for ${n}; nothing was computed.` })
  for (let k = 0; k < n; k++) {
    finite(`set-point time ${k}`, times[k])
    finite(`set-point value ${k}`, values[k])
    if (k > 0 && !(times[k] > times[k - 1])) throw new NumericError('bad-input', { field: 'set-point', value: times[k], text: `Set-point time ${k} does not come after the one before it; nothing was computed. Sort the log.` })
  }
  let at = 0
  return (t) => {
    while (at + 1 < n && times[at + 1] <= t + SAME_INSTANT) at++
    return values[at]
  }
}

function finite(field: string, value: number): number {
  guardNumber(field, value, 'any')
  return value
}

function positive(field: string, value: number): number {
  guardNumber(field, value, 'positive')
  return value
}
