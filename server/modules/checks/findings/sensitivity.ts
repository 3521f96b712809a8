import { shown, type RawFinding } from './finding.ts'
import { about, gainOf, loopOrder, type JointContext } from './joint-context.ts'

/** Sensitivity peak M_s of each loop: how much the loop amplifies at its worst frequency. */
export function sensitivityFindings(c: JointContext): RawFinding[] {
  const { advise, concession } = c.policy.sensitivityPeak
  return loopOrder.flatMap((loop): RawFinding[] => {
    const value = c.figures?.loops[loop]?.sensitivityPeak
    if (value === undefined || value === null) return []
    const level = value > concession ? 'concession needed' : value > advise ? 'advise' : 'pass'
    return [
      about(c, {
        kind: 'sensitivity peak', loop, level, value, limit: level === 'concession needed' ? concession : advise, unit: '', blame: gainOf[loop],
        source: 'Åström & Hägglund, Advanced PID Control: 1.2 to 2.0 (from memory); GM ≥ M_s/(M_s − 1), PM ≥ 2·asin(1/(2·M_s))',
        text: `The ${loop} loop amplifies by M_s = ${shown(value)} at its worst frequency.`, remedy: level === 'pass' ? '' : 'Small errors of the model cost much there; lower the gain, or take out delay.',
      }),
    ]
  })
}
