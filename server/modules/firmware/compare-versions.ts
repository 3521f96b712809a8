import type { FirmwareComparisonView } from '../../../shared/contract/firmware.ts'
import { compareSchemas } from '../../../shared/registers/compare-schemas.ts'
import type { FirmwareVersion } from './firmware-version.entity.ts'
import { schemaOf } from './read-schema.ts'

const brief = (v: FirmwareVersion) => ({ version: v.version, state: v.state, schemaHash: v.schemaHash })

/** What differs between two versions of one line: parameters added, removed, moved, rescaled, and what else of them does. */
export function compareVersions(before: FirmwareVersion, after: FirmwareVersion): FirmwareComparisonView {
  const was = schemaOf(before).schema
  const is = schemaOf(after).schema
  const comparison = compareSchemas(was, is)
  const titles = comparison.parameters.map(({ parameter, kind }) => {
    const p = (kind === 'removed' ? was : is).byName.get(parameter)!
    return [parameter, { title: p.title, unit: p.unit ?? '' }] as const
  })
  return {
    ...comparison,
    line: after.line.key,
    lineName: after.line.name,
    before: brief(before),
    after: brief(after),
    titles: Object.fromEntries(titles),
    carry: is.carry?.from === before.version ? is.carry : null,
    schemaTextBefore: before.schemaText,
    schemaTextAfter: after.schemaText,
  }
}
