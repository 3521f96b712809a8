import type { FindingLevel, LoopFigures, LoopName, ToleranceFigures, WorstFigure } from '../../../../shared/contract/checks.ts'
import { cornerWords, coverage } from './corner-words.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, gainOf, loopOrder, type JointContext } from './joint-context.ts'

interface MarginKind {
  kind: string
  unit: string
  source: string
  nominal: number
  worst: number
  /** below it nothing is granted; null: concessions reach all the way down */
  block: number | null
  of: (loop: LoopFigures) => { value: number | null; reads: string }
  worstOf: (loop: NonNullable<ToleranceFigures['loops'][LoopName]>) => WorstFigure | null
  consequence: string
}

const kindsOf = ({ policy }: JointContext): MarginKind[] => [
  {
    kind: 'phase margin', unit: '°', source: 'Åström & Murray, Feedback Systems: 30° to 60° (from memory)',
    nominal: policy.phaseMarginDeg.nominal, worst: policy.phaseMarginDeg.worst, block: policy.phaseMarginDeg.block,
    of: (l) => ({ value: l.phaseMarginDeg, reads: l.phaseMarginReads }), worstOf: (l) => l.phaseMarginDeg,
    consequence: 'Steps ring and disturbances are amplified; lower the gain, or take out delay (window, rates, output delay).',
  },
  {
    kind: 'gain margin', unit: 'dB', source: 'Åström & Murray, Feedback Systems: a factor of 2 to 5 (from memory)',
    nominal: policy.gainMarginDb.nominal, worst: policy.gainMarginDb.worst, block: null,
    of: (l) => ({ value: l.gainMarginDb, reads: l.gainMarginReads }), worstOf: (l) => l.gainMarginDb,
    consequence: 'A lighter load or a stronger motor than the model says brings the loop to the edge; lower the gain, or take out delay.',
  },
]

const levelOf = (value: number, limit: number, block: number | null): { level: FindingLevel; limit: number } =>
  block !== null && value < block ? { level: 'block', limit: block } : { level: value < limit ? 'concession needed' : 'pass', limit }

function nominalMargin(c: JointContext, loop: LoopName, m: MarginKind): RawFinding {
  const figures = c.figures!.loops[loop]!
  const base = { kind: m.kind, loop, unit: m.unit, source: m.source, blame: gainOf[loop] }
  if (figures.verdict !== 'stable')
    return about(c, { ...base, level: 'block', value: null, limit: m.nominal, text: `The ${loop} loop is ${figures.verdict} with the loops outside it open, so it has no ${m.kind}.`, remedy: 'Whatever opens the outer loop sets it swinging; lower its gain until it stands alone.' })
  const { value, reads } = m.of(figures)
  if (value === null) return about(c, { ...base, level: 'pass', value: null, limit: m.nominal, text: `The ${loop} loop's ${m.kind} is ${reads}.`, remedy: '' })
  const judged = levelOf(value, m.nominal, m.block)
  return about(c, { ...base, ...judged, value, text: `The ${loop} loop's ${m.kind} is ${shown(value)} ${m.unit}.`.replace(' °', '°'), remedy: judged.level === 'pass' ? '' : m.consequence })
}

function worstMargin(c: JointContext, loop: LoopName, m: MarginKind): RawFinding[] {
  const t = c.figures!.tolerance
  const swept = t?.loops[loop]
  if (!t || !swept) return []
  const base = { kind: `worst ${m.kind}`, loop, unit: m.unit, source: m.source, blame: gainOf[loop] }
  if (swept.unstable > 0)
    return [about(c, { ...base, level: 'block', value: null, limit: m.worst, text: `The ${loop} loop alone is not stable at ${swept.unstable} of ${t.vertices.points + t.samplesWithMargins} points of its tolerances, so it has no ${m.kind} there.`, remedy: 'Whatever opens the outer loop there sets it swinging; lower its gain until it stands alone.' })]
  const worst = m.worstOf(swept)
  if (!worst) return [about(c, { ...base, level: 'pass', value: null, limit: m.worst, text: `The ${loop} loop has no end to its ${m.kind} at any of ${coverage(t)}.`, remedy: '' })]
  const judged = levelOf(worst.value, m.worst, m.block)
  return [about(c, { ...base, ...judged, value: worst.value, text: `The ${loop} loop's ${m.kind} is ${shown(worst.value)} ${m.unit} at the worst of ${coverage(t)}: ${cornerWords(t, worst.at)}.`.replace(' ° ', '° '), remedy: judged.level === 'pass' ? '' : m.consequence })]
}

/** Gain and phase margins of each loop, as it stands and at the worst of its tolerances. */
export function marginFindings(c: JointContext): RawFinding[] {
  if (!c.figures) return []
  const loops = loopOrder.filter((loop) => c.figures!.loops[loop])
  return loops.flatMap((loop) => kindsOf(c).flatMap((m) => [nominalMargin(c, loop, m), ...worstMargin(c, loop, m)]))
}
