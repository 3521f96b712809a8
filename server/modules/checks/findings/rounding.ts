import type { PolicyContent } from '../../../../shared/contract/policy.ts'
import type { EncodedImage } from '../../../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../../../shared/registers/parameter-schema.ts'
import { shown, type RawFinding } from './finding.ts'

/** How far the registers round each gain. The check runs on the rounded values; this says how much they lost. */
export function roundingFindings(place: string, joint: string, schema: ParameterSchema, encoded: EncodedImage, policy: PolicyContent): RawFinding[] {
  const gains = encoded.rows.filter((row) => /\.k[pi]$/.test(schema.byName.get(row.parameter)?.role ?? ''))
  const worst = gains.map((row) => ({ row, percent: row.errorRelative === null ? (row.errorAbsolute === 0 ? 0 : 100) : Math.abs(row.errorRelative) * 100 })).sort((a, b) => b.percent - a.percent)[0]
  if (!worst) return []
  const { advise, concession } = policy.roundingPercent
  const level = worst.percent > concession ? 'concession needed' : worst.percent > advise ? 'advise' : 'pass'
  return [{
    place, joint, kind: 'register rounding', level, value: worst.percent, limit: level === 'concession needed' ? concession : advise, unit: '%', source: 'team policy',
    text: `The register rounds ${worst.row.title} by ${shown(worst.percent)} %${gains.length > 1 ? ', the most of the gains' : ''}.`, remedy: level === 'pass' ? '' : 'The board runs another gain than typed; choose a value the register holds, or a finer encoding.',
  }]
}
