import { cornerWords } from './corner-words.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, gainOf, type JointContext } from './joint-context.ts'

const source = 'definition: ρ(Φ) < 1 (server/control/MODEL.md)'
const remedy = 'The joint would oscillate beside people; lower the outermost gain that moves, or shorten the delay it works against.'

/** The loop as it stands, at nominal values: ρ of one hyperperiod below 1. */
function nominalStability(c: JointContext): RawFinding[] {
  const { figures } = c
  if (!figures) return []
  const base = { kind: 'closed loop', value: figures.rho, limit: 1, unit: '', source, blame: gainOf[c.model!.firmware.mode] }
  if (figures.verdict === 'stable') return [about(c, { ...base, level: 'pass', text: `The closed loop is stable: ρ is ${figures.rho.toPrecision(6)} over ${shown(figures.hyperperiodS * 1e3)} ms.`, remedy: '' })]
  const text =
    figures.verdict === 'unstable'
      ? `The closed loop is unstable: ρ is ${figures.rho.toPrecision(6)}, so a disturbance grows instead of dying away.`
      : `The closed loop is on the boundary: ρ can't be told from 1, and a disturbance would not die away.`
  return [about(c, { ...base, level: 'block', text, remedy })]
}

/** The same at every corner and sample of the tolerance box; "on the boundary" counts as unstable. */
function toleranceStability(c: JointContext): RawFinding[] {
  const t = c.figures?.tolerance
  if (!t) return []
  const base = { kind: 'closed loop over the tolerances', value: t.worstRho.value, limit: 1, unit: '', source, blame: gainOf[c.model!.firmware.mode] }
  const back = t.bounds.find((b) => b.name === 'eta')?.high === 1 ? '; a gear of this efficiency is not driven back, so η is walked up to 1' : ''
  const wrong = t.vertices.points - t.vertices.stable + t.samples.points - t.samples.stable
  if (wrong === 0) return [about(c, { ...base, level: 'pass', text: `The closed loop is stable at all ${t.vertices.points} corners and ${t.samples.points} samples of its tolerances${back}.`, remedy: '' })]
  const at = t.worstRho.at
  return [
    about(c, {
      ...base,
      level: 'block',
      text: `The closed loop is not stable at ${t.vertices.points - t.vertices.stable} of ${t.vertices.points} corners and ${t.samples.points - t.samples.stable} of ${t.samples.points} samples of its tolerances; ρ is ${t.worstRho.value.toPrecision(6)} at ${cornerWords(t, at)}${back}.`,
      remedy,
    }),
  ]
}

export const stabilityFindings = (c: JointContext): RawFinding[] => [...nominalStability(c), ...toleranceStability(c)]
