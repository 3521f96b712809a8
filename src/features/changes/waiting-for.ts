import type { ChangeSummary } from '../../../shared/contract/changes.ts'

export interface Waiting {
  /** submitted by others, for a peer review */
  toSign: ChangeSummary[]
  /** approved, written by others, for the release signature */
  toRelease: ChangeSummary[]
  /** own drafts that came back */
  returned: ChangeSummary[]
  /** own drafts */
  drafts: ChangeSummary[]
  /** own, on their way with others */
  away: ChangeSummary[]
}

/**
 * What waits for one person among the changes they may read.
 *
 * @param name   the person's, as changes name their writers
 * @param holds  whether the person holds an act of the matrix on a machine: to sort by only, the server decides when it is done
 */
export function waitingFor(changes: readonly ChangeSummary[], name: string, holds: (act: string, machine: string) => boolean): Waiting {
  const oldestFirst = changes.toSorted((a, b) => a.alteredAt.localeCompare(b.alteredAt))
  const wrote = (c: ChangeSummary) => c.writers.includes(name)
  return {
    toSign: oldestFirst.filter((c) => c.state === 'submitted' && !wrote(c) && holds('sign peer review', c.machine)),
    toRelease: oldestFirst.filter((c) => c.state === 'approved' && !wrote(c) && holds('sign release', c.machine)),
    returned: oldestFirst.filter((c) => c.state === 'draft' && wrote(c) && c.life !== 'draft'),
    drafts: oldestFirst.filter((c) => c.state === 'draft' && wrote(c) && c.life === 'draft'),
    away: oldestFirst.filter((c) => (c.state === 'submitted' || c.state === 'approved') && wrote(c)),
  }
}
