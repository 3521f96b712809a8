import { analyse } from '../../control/analyse.ts'
import { parameterNamed } from '../../control/parameters.ts'
import { rankBySensitivity } from '../../control/sensitivity.ts'
import type { ToleranceBox } from '../../control/tolerance.ts'
import { robustRetune, type Gains } from '../../control/tuning/robust-retune.ts'
import type { RetuneInputs } from './requests.ts'
import { windowOf } from './step-response.ts'

const seed = 20260302
/** Bounds that the search walks: the proposal is swept over all of them afterwards. */
const mostBounds = 6

export interface RetuneResult {
  better: boolean
  gains: Gains
  /** smallest margin over the corners walked, in shares of 45° and 8 dB */
  before: number
  after: number
  tried: number
  ended: 'converged' | 'tries used up'
  boundsWalked: string[]
}

/** The bounds that matter most; a compensated supply moves no margin. */
function boxOf({ model, bounds }: RetuneInputs): ToleranceBox {
  const moving = bounds.filter((b) => b.name !== 'V_bus' || !model.firmware.supply_compensated)
  const ranked = moving.length <= mostBounds ? null : rankBySensitivity(model, moving.map((b) => parameterNamed(b.name)), Float64Array.from(moving, (b) => b.low), Float64Array.from(moving, (b) => b.high), true)
  const chosen = ranked ? new Set<string>(ranked.slice(0, mostBounds).map((s) => s.name)) : null
  return Object.fromEntries(moving.filter((b) => !chosen || chosen.has(b.name)).map((b) => [b.name, [b.low, b.high] as const]))
}

/** Searches gains for the largest worst margin; tells after each trial how many it has tried. @throws NumericError */
export function retuneAnalysis(inputs: RetuneInputs, told: (tried: number) => void): RetuneResult {
  const { model, gains, bandwidthHz, peakCurrent, tries } = inputs
  const box = boxOf(inputs)
  const run = peakCurrent && {
    limit: peakCurrent.limit,
    run: {
      profile: 'step' as const, step_to: peakCurrent.step.to, theta_0: 0, t_end: windowOf(model, analyse(model).slowestTimeConstant), encoder_quantised: true, current_quantised: true, tau_load: 0,
      backlash: peakCurrent.step.backlash, source_resistance: peakCurrent.step.source_resistance,
    },
  }
  const search = robustRetune(model, { gains, box, constraints: { bandwidthHz, ...(run ? { peakCurrent: run } : {}) }, tries, seed })
  for (;;) {
    const step = search.next()
    told(step.value.tried)
    if (!step.done) continue
    const { outcome, best, before, bestScore, tried, ended } = step.value
    return { better: outcome === 'better', gains: best, before: before.worst, after: bestScore.worst, tried, ended, boundsWalked: Object.keys(box) }
  }
}
