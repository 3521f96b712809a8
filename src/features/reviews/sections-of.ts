import type { DiffGroup, DiffRow } from '../../../shared/contract/reviews.ts'
import { byLaw } from '../../../shared/parameters/laws.ts'

export interface Section {
  title: string
  /** whose values they are: "Knee family", "R3 knee" */
  of: string
  rows: DiffRow[]
}

const isSetting = (r: DiffRow) => r.role === null && r.register === null

/** Settings of the joint first, then its values by law, then what single joints have of their own. */
export function sectionsOf(group: DiffGroup, family: string, nameOf: (joint: string) => string): Section[] {
  const settings = group.rows.filter(isSetting)
  return [
    ...(settings.length > 0 ? [{ title: 'place and firmware', of: family, rows: settings }] : []),
    ...byLaw(group.rows.filter((r) => !isSetting(r))).map(({ law, things }) => ({ title: law, of: family, rows: things })),
    ...group.own.map(({ joint, rows }) => ({ title: ownTitle(nameOf(joint), rows), of: nameOf(joint), rows })),
  ]
}

function ownTitle(name: string, rows: readonly DiffRow[]): string {
  if (rows.every((r) => r.before?.origin === 'joint' && r.after && r.after.origin !== 'joint')) return `${name} gives up its own ${rows.length === 1 ? 'value' : 'values'}`
  if (rows.every((r) => r.after?.origin === 'joint')) return `${name} has ${rows.length === 1 ? 'a value' : 'values'} of its own`
  return `${name} differs`
}
