import type { HeatFigures } from '../../../shared/contract/checks.ts'
import { continuousCurrent, steadyTemperature, timeToTemperature } from '../../control/simulation/winding-heat.ts'
import type { HeatInputs } from './requests.ts'

/** How warm the winding gets under the registers' limits. @throws NumericError naming the thermal value that can't be */
export function windingFigures({ node, hasTime, T_max, continuous, peak }: HeatInputs): HeatFigures {
  const steady = continuous === null ? null : steadyTemperature(node, continuous)
  const time = peak === null || !hasTime ? null : timeToTemperature(node, peak, T_max)
  return {
    nodes: 'R_th' in node ? 1 : 2,
    ambientCelsius: node.T_amb,
    limitCelsius: T_max,
    continuousCurrentA: continuousCurrent(node, T_max),
    continuousA: continuous,
    steadyCelsius: steady?.kind === 'steady' ? steady.celsius : null,
    steadyReads: steady === null ? 'no continuous limit' : steady.kind === 'steady' ? '' : 'no steady temperature',
    peakA: peak,
    timeAtPeakS: time?.kind === 'time' ? time.seconds : time?.kind === 'already there' ? 0 : null,
    timeAtPeakReads: peak === null ? 'no current limit' : time === null ? 'time constants missing' : time.kind === 'never' ? 'never reaches the limit' : time.kind === 'already there' ? 'ambient is at the limit' : '',
  }
}
