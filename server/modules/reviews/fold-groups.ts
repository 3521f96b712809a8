import type { DiffGroup, DiffRow } from '../../../shared/contract/reviews.ts'
import { same } from '../../../shared/parameters/edits.ts'
import type { Plain } from './marked.ts'

type Row = Plain<DiffRow>
export interface JointRows {
  family: string
  joint: string
  rows: Row[]
}
export type FoldedGroup = Omit<DiffGroup, 'rows' | 'own'> & { rows: Row[]; own: { joint: string; rows: Row[] }[] }

/** Joints of a family whose rows are all the same, most joints first. */
function alike(joints: readonly JointRows[]): { joints: string[]; rows: Row[] }[] {
  const groups: { joints: string[]; rows: Row[] }[] = []
  for (const { joint, rows } of joints) {
    if (rows.length === 0) continue
    const group = groups.find((g) => same(g.rows, rows))
    if (group) group.joints.push(joint)
    else groups.push({ joints: [joint], rows })
  }
  return groups.toSorted((a, b) => b.joints.length - a.joints.length)
}

/**
 * Folds the rows of joints: in each family what most joints share stands once, and a joint that departs from it shows its own rows alone.
 *
 * A joint is put beside the family's rows when it has every one of their parameters; else it keeps a group of its own.
 */
export function foldGroups(all: readonly JointRows[]): FoldedGroup[] {
  const families = [...new Set(all.map((j) => j.family))]
  return families.flatMap((family) => {
    const [main, ...others] = alike(all.filter((j) => j.family === family))
    if (!main) return []
    const folded: FoldedGroup = { family, joints: [...main.joints], rows: main.rows, own: [] }
    const apart: FoldedGroup[] = []
    for (const g of others) {
      const differing = g.rows.filter((r) => !main.rows.some((m) => same(m, r)))
      const covers = main.rows.every((m) => g.rows.some((r) => r.parameter === m.parameter))
      if (covers && differing.length < g.rows.length) {
        folded.joints.push(...g.joints)
        for (const joint of g.joints) folded.own.push({ joint, rows: differing })
      } else apart.push({ family, joints: g.joints, rows: g.rows, own: [] })
    }
    return [folded, ...apart]
  })
}
