import type { BoardSummary } from '../../../shared/contract/boards.ts'
import { csvLine } from '../../exports/csv-text.ts'

/** Boards as CSV: keys, serial numbers, versions and times alone, so that no cell holds words that somebody typed. Importing it again alters nothing. */
export const exportBoards = (boards: readonly BoardSummary[]): string =>
  [['serial', 'machine', 'joint', 'firmware', 'release', 'known', 'state', 'recorded'], ...boards.map((b) => [b.serial, b.machine, b.joint?.key ?? '', b.firmware ?? '', b.release ?? '', b.known ?? '', b.state, b.knownAt ?? ''])].map(csvLine).join('')
