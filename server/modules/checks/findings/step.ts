import type { StepFigures } from '../../../../shared/contract/checks.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, type JointContext } from './joint-context.ts'

const team = 'team policy'
const unitOf = { position: 'rad', velocity: 'rad/s', current: 'A' } as const

/** What one count is in the signal that the closed mode commands: an encoder count, the velocity estimate's quantum, or the current sensor's step. */
export function countOf(c: JointContext, step: StepFigures): { size: number; words: string } {
  const { plant, firmware } = c.model!
  const angle = (2 * Math.PI) / 2 ** plant.bits / (plant.encoder === 'motor' ? plant.N : 1)
  if (step.response === 'position') return { size: angle, words: 'encoder counts' }
  if (step.response === 'velocity') return { size: (angle * firmware.f_o) / firmware.W, words: 'velocity quanta' }
  return { size: plant.i_lsb, words: 'sensor steps' }
}

/** The simulated step at nominal values: overshoot, settling, what is left at the end. */
export function stepFindings(c: JointContext): RawFinding[] {
  const step = c.figures?.step
  if (!step || !c.model) return []
  const name = `a step of ${shown(step.stepTo)} ${unitOf[step.response]}`
  const { overshootPercent, finalErrorCounts } = c.policy
  const over = step.overshootPercent > overshootPercent
  const findings = [
    about(c, {
      kind: 'overshoot', level: over ? 'advise' : 'pass', value: step.overshootPercent, limit: overshootPercent, unit: '%', source: team, blame: 'position.kp',
      text: `${name[0].toUpperCase()}${name.slice(1)} overshoots by ${shown(step.overshootPercent)} %.`, remedy: over ? 'The joint runs past where it was sent; lower the outermost gain or its integral gain.' : '',
    }),
  ]
  const target = c.driveTrain.settling_target
  if (target !== undefined) {
    const slow = step.settlingTimeS === null || step.settlingTimeS > target
    findings.push(
      about(c, {
        kind: 'settling', level: slow ? 'advise' : 'pass', value: step.settlingTimeS === null ? null : step.settlingTimeS * 1e3, limit: target * 1e3, unit: 'ms', source: "the joint's own target", blame: 'position.kp',
        text: step.settlingTimeS === null ? `${name[0].toUpperCase()}${name.slice(1)} does not settle within ${shown(step.windowS * 1e3)} ms.` : `${name[0].toUpperCase()}${name.slice(1)} settles to 2 % in ${shown(step.settlingTimeS * 1e3)} ms.`,
        remedy: slow ? 'The joint is slower than it is meant to be; raise the outermost gain, or its speed and current limits.' : '',
      }),
    )
  }
  const count = countOf(c, step)
  const left = Math.abs(step.finalError) / count.size
  const rest = left > finalErrorCounts
  findings.push(
    about(c, {
      kind: 'final error', level: rest ? 'advise' : 'pass', value: left, limit: finalErrorCounts, unit: 'counts', source: team, blame: 'velocity.ki',
      text: `After ${name} ${shown(left)} ${count.words} are left.`, remedy: rest ? 'Friction holds the joint short of its target; more integral gain works it off.' : '',
    }),
  )
  return findings
}

/** A limit cycle shows in the last fifth of the simulated step. */
export function limitCycleFindings(c: JointContext): RawFinding[] {
  const step = c.figures?.step
  if (!step || !c.model) return []
  const limit = c.policy.limitCycleCounts
  const base = { kind: 'limit cycle', limit, unit: 'counts', source: 'Peng, Prodić et al. 2007 (from memory) for the conditions', blame: 'velocity.ki' as const }
  const { backlash, k_s } = c.driveTrain
  if (backlash !== undefined && backlash > 0 && k_s === undefined)
    return [about(c, { ...base, level: 'concession needed', value: null, text: 'not assessed: backlash is given on a rigid drive train, where nothing can rattle.', remedy: 'Backlash and integral action may hunt for ever; give the torsional stiffness k_s and its damping, or take the backlash out.' })]
  const count = countOf(c, step)
  const value = step.rippleOfResponse / count.size
  const over = value > limit
  return [
    about(c, {
      ...base, level: over ? 'concession needed' : 'pass', value, text: `At the end of the step the joint still moves by ${shown(value)} ${count.words}, peak to peak.`,
      remedy: over ? 'It hums or hunts at rest; lower the integral gains, lengthen the velocity window, or take a finer sensor.' : '',
    }),
  ]
}
