import { shown, type RawFinding } from './finding.ts'
import { about, type JointContext } from './joint-context.ts'

/** How far the registers round each gain. The check runs on the rounded values; this says how much they lost. */
export function roundingFindings(c: JointContext): RawFinding[] {
  const gains = c.encoded.rows.flatMap((row) => {
    const role = c.schema.byName.get(row.parameter)?.role
    return role && /\.k[pi]$/.test(role) ? [{ row, role, percent: row.errorRelative === null ? (row.errorAbsolute === 0 ? 0 : 100) : Math.abs(row.errorRelative) * 100 }] : []
  })
  const worst = gains.toSorted((a, b) => b.percent - a.percent)[0]
  if (!worst) return []
  const { advise, concession } = c.policy.roundingPercent
  const level = worst.percent > concession ? 'concession needed' : worst.percent > advise ? 'advise' : 'pass'
  return [
    about(c, {
      kind: 'register rounding', level, value: worst.percent, limit: level === 'concession needed' ? concession : advise, unit: '%', source: 'team policy', blame: worst.role,
      text: `The register rounds ${worst.row.title} by ${shown(worst.percent)} %${gains.length > 1 ? ', the most of the gains' : ''}.`, remedy: level === 'pass' ? '' : 'The board runs another gain than typed; choose a value the register holds, or a finer encoding.',
    }),
  ]
}
