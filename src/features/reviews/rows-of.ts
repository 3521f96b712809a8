import type { DiffView, Marked } from '../../../shared/contract/reviews.ts'
import { sectionsOf } from './sections-of.ts'

/** Every row of a diff, in the order of the page. */
export const rowsOf = (diff: DiffView): Marked[] => [
  ...diff.groups.flatMap((g) => sectionsOf(g, g.family, (joint) => joint).flatMap((s) => s.rows)),
  ...diff.joints,
  ...[...diff.driveTrains, ...diff.families, ...diff.buses].flatMap((d) => d.rows),
]
