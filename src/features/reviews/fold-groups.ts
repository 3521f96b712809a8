import type { DiffGroup, DiffRow } from '../../../shared/contract/reviews.ts'
import { same } from '../../../shared/parameters/edits.ts'

export interface FoldedGroup {
  family: string
  /** joints whose rows all stand here */
  joints: string[]
  /** rows that all these joints share */
  rows: DiffRow[]
  /** joints that differ from their family in a few rows: those rows alone */
  own: { joint: string; rows: DiffRow[] }[]
}

const key = (row: DiffRow) => row.parameter

/**
 * Folds a diff once more: in each family the rows that most joints share stand once, and a joint that departs shows its own rows alone.
 *
 * A joint is put beside the family's rows when it has every one of their parameters; else it keeps a group of its own.
 */
export function foldGroups(groups: readonly DiffGroup[]): FoldedGroup[] {
  const families = [...new Set(groups.map((g) => g.family))]
  return families.flatMap((family) => {
    const own = groups.filter((g) => g.family === family).toSorted((a, b) => b.joints.length - a.joints.length)
    const [main, ...others] = own
    const folded: FoldedGroup = { family, joints: [...main.joints], rows: main.rows, own: [] }
    const apart: FoldedGroup[] = []
    for (const g of others) {
      const differing = g.rows.filter((r) => !main.rows.some((m) => same(m, r)))
      const covers = main.rows.every((m) => g.rows.some((r) => key(r) === key(m)))
      if (covers && differing.length < g.rows.length) {
        folded.joints.push(...g.joints)
        for (const joint of g.joints) folded.own.push({ joint, rows: differing })
      } else apart.push({ family, joints: g.joints, rows: g.rows, own: [] })
    }
    return [folded, ...apart]
  })
}

/** Rows of a diff that are values in registers, counted over every joint. */
export const valueCount = (groups: readonly DiffGroup[]): number => groups.reduce((n, g) => n + g.joints.length * g.rows.length, 0)
