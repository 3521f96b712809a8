import type { LoopName } from '../../../../shared/contract/checks.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, gainOf, numberOf, type JointContext } from './joint-context.ts'

const width = (c: JointContext, loop: LoopName) => c.figures?.loops[loop]?.bandwidthHz ?? null

/** How much faster each loop is than the one around it. */
export function separationFindings(c: JointContext): RawFinding[] {
  const { advise, concession } = c.policy.separation
  const pairs: [LoopName, LoopName][] = [['current', 'velocity'], ['velocity', 'position']]
  return pairs.flatMap(([inner, outer]): RawFinding[] => {
    const [fast, slow] = [width(c, inner), width(c, outer)]
    if (fast === null || slow === null || slow === 0) return []
    const value = fast / slow
    const level = value < concession ? 'concession needed' : value < advise ? 'advise' : 'pass'
    return [
      about(c, {
        kind: 'separation', loop: outer, level, value, limit: level === 'concession needed' ? concession : advise, unit: '', source: 'common practice: 3 to 10', blame: gainOf[outer],
        text: `The ${inner} loop is ${shown(value)} times as fast as the ${outer} loop around it.`, remedy: level === 'pass' ? '' : `The ${outer} loop leans on one that can't keep up; slow it down or make the ${inner} loop faster.`,
      }),
    ]
  })
}

/** The outer task's rate against what it closes. */
export function samplingFindings(c: JointContext): RawFinding[] {
  const slow = width(c, 'velocity')
  if (!c.model || slow === null || slow === 0) return []
  const value = c.model.firmware.f_o / slow
  const limit = c.policy.outerRateOverBandwidth
  const level = value < limit ? 'advise' : 'pass'
  return [
    about(c, {
      kind: 'outer rate over bandwidth', loop: 'velocity', level, value, limit, unit: '', source: 'Franklin, Powell & Workman: 20 to 40 (from memory)', blame: 'rate.outer',
      text: `The outer task runs ${shown(value)} times in a period of the velocity bandwidth.`, remedy: level === 'pass' ? '' : 'Between its ticks the loop is blind; raise the outer rate or lower the velocity gain.',
    }),
  ]
}

/** Phase that computing and holding cost the current loop: 360°·f_x·(D + 0.5)·T_c. */
export function deadTimeFindings(c: JointContext): RawFinding[] {
  const crossover = c.figures?.loops.current?.phaseMarginHz
  if (!c.model || crossover === undefined || crossover === null) return []
  const { D, f_c } = c.model.firmware
  const value = (360 * crossover * (D + 0.5)) / f_c
  const limit = c.policy.deadTimePhaseDeg
  const level = value > limit ? 'advise' : 'pass'
  return [
    about(c, {
      kind: 'dead time', loop: 'current', level, value, limit, unit: '°', source: 'Buso & Mattavelli (from memory): 540°·f_x/f_s for D = 1', blame: 'current.kp',
      text: `Dead time costs the current loop ${shown(value)}° of phase at its crossover of ${shown(crossover)} Hz.`, remedy: level === 'pass' ? '' : 'Little is left for anything else; lower the current gain, raise the current rate or shorten the output delay.',
    }),
  ]
}

/** What the window costs the velocity loop: a delay of W·T_o/2. The margins hold it already, so it has no limit of its own. */
export function windowFindings(c: JointContext): RawFinding[] {
  if (!c.model || !c.figures?.loops.velocity) return []
  const { W, f_o } = c.model.firmware
  const lag = W / (2 * f_o)
  const crossover = c.figures.loops.velocity.phaseMarginHz
  const cost = crossover === null ? '' : `, ${shown(360 * crossover * lag)}° at its crossover of ${shown(crossover)} Hz`
  return [about(c, { kind: 'window delay', loop: 'velocity', level: 'pass', value: lag * 1e3, limit: null, unit: 'ms', source: 'a difference over W samples lags by W·T_o/2 (server/control/MODEL.md)', text: `The velocity window lags by ${shown(lag * 1e3)} ms${cost}.`, remedy: '' })]
}

/** Current that the velocity estimate's quantum alone causes: (K_pv + K_iv·T_o)·lsb/(W·T_o). */
export function rippleFindings(c: JointContext): RawFinding[] {
  const { model } = c
  const limitA = numberOf(c, 'current.limit')
  if (!model || !c.figures?.loops.velocity || limitA === null || limitA <= 0) return []
  const { plant, firmware } = model
  const count = (2 * Math.PI) / 2 ** plant.bits / (plant.encoder === 'motor' ? plant.N : 1)
  const ripple = (firmware.K_pv + firmware.K_iv / firmware.f_o) * ((count * firmware.f_o) / firmware.W)
  const value = (ripple / limitA) * 100
  const limit = c.policy.quantumRipplePercent
  const level = value > limit ? 'advise' : 'pass'
  return [
    about(c, {
      kind: 'quantum ripple', loop: 'velocity', level, value, limit, unit: '%', source: 'server/control/MODEL.md, closed forms; team policy', blame: 'velocity.window',
      text: `One encoder count alone moves the current by ${shown(ripple)} A, ${shown(value)} % of its limit.`, remedy: level === 'pass' ? '' : 'The joint hums at rest and warms; lengthen the velocity window or lower the velocity gain.',
    }),
  ]
}
