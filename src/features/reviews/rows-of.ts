import type { DiffView, Marked } from '../../../shared/contract/reviews.ts'

/** Every row of a diff, in the order of the page. */
export const rowsOf = (diff: DiffView): Marked[] => [
  ...diff.groups.flatMap((g) => [...g.rows, ...g.own.flatMap((o) => o.rows)]),
  ...diff.joints,
  ...[...diff.driveTrains, ...diff.families, ...diff.buses].flatMap((d) => d.rows),
]
