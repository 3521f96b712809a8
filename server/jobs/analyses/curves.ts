import type { LoopCurve, LoopName } from '../../../shared/contract/checks.ts'
import { frequencyResponses } from '../../control/frequency-response.ts'
import { closuresOf } from '../../control/monodromy.ts'
import { closedMode } from '../../control/sampled-joint.ts'
import type { CurvesInputs } from './requests.ts'

export type CurvesResult = Partial<Record<LoopName, LoopCurve>>

const points = 300

/** Frequencies of a loop's curve: in equal ratios up to half the rate of its own task. */
function frequencies(loop: LoopName, f_c: number, f_o: number): Float64Array {
  const high = (loop === 'current' ? f_c : f_o) / 2
  const low = high / (loop === 'current' ? 1e3 : 1e4)
  return Float64Array.from({ length: points }, (_, k) => low * (high / low) ** (k / (points - 1)))
}

const decibels = (re: number, im: number) => Math.max(-300, 20 * Math.log10(Math.hypot(re, im)))

/** Phase along a curve, degrees, without jumps; it begins within ±180°. */
function unwrapped(re: Float64Array, im: Float64Array): number[] {
  const out: number[] = []
  let turns = 0
  let before = 0
  for (let k = 0; k < re.length; k += 1) {
    const here = (Math.atan2(im[k], re[k]) * 180) / Math.PI
    if (k > 0 && here - before > 180) turns -= 360
    if (k > 0 && here - before < -180) turns += 360
    before = here
    out.push(Number((here + turns).toPrecision(6)))
  }
  return out
}

/** Bode curves of every loop the joint closes; loops of one task share their frequencies. @throws NumericError */
export function curvesAnalysis({ model }: CurvesInputs): CurvesResult {
  const { f_c, f_o } = model.firmware
  const six = (v: number) => Number(v.toPrecision(6))
  const loops = closuresOf(closedMode(model))
  const responses = [loops.slice(0, 1), loops.slice(1)].flatMap((alike) => (alike.length === 0 ? [] : frequencyResponses(model, alike, frequencies(alike[0], f_c, f_o))))
  return Object.fromEntries(
    responses.map((r): [LoopName, LoopCurve] => [
      r.loop,
      {
        hz: Array.from(r.hz, six),
        openDb: Array.from(r.L_re, (re, k) => six(decibels(re, r.L_im[k]))),
        openPhaseDeg: unwrapped(r.L_re, r.L_im),
        closedDb: Array.from(r.T_re, (re, k) => six(decibels(re, r.T_im[k]))),
        closedPhaseDeg: unwrapped(r.T_re, r.T_im),
      },
    ]),
  )
}
