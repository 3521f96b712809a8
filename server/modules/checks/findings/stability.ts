import type { JointFigures } from '../../../../shared/contract/checks.ts'
import { shown, type RawFinding } from './finding.ts'

/** The loop as it stands, at nominal values: ρ of one hyperperiod below 1. */
export function stabilityFinding(place: string, joint: string, figures: JointFigures): RawFinding {
  const base = { place, joint, kind: 'closed loop', value: figures.rho, limit: 1, unit: '', source: 'definition: ρ(Φ) < 1 (server/control/MODEL.md)' }
  if (figures.verdict === 'stable') return { ...base, level: 'pass', text: `The closed loop is stable: ρ is ${figures.rho.toPrecision(6)} over ${shown(figures.hyperperiodS * 1e3)} ms.`, remedy: '' }
  const unstable = figures.verdict === 'unstable'
  return {
    ...base,
    level: 'block',
    text: unstable ? `The closed loop is unstable: ρ is ${figures.rho.toPrecision(6)}, so a disturbance grows instead of dying away.` : `The closed loop is on the boundary: ρ can't be told from 1, and a disturbance would not die away.`,
    remedy: 'The joint would oscillate beside people; lower the outermost gain that moves, or shorten the delay it works against.',
  }
}
