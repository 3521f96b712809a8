import type { BoardSummary } from '../../../shared/contract/boards.ts'
import type { ChangeSummary } from '../../../shared/contract/changes.ts'
import type { ReleaseSummary } from '../../../shared/contract/releases.ts'
import { paths } from '../../app/paths.ts'

/** What the tour finds its examples in. */
export interface TourSights {
  changes: readonly ChangeSummary[]
  releases: readonly ReleaseSummary[]
  boards: readonly BoardSummary[]
}

export interface TourStep {
  title: string
  text: string
  /** what to look for on the page, or to try */
  look: string
  /** the page it is told on: a fitting example of this workplace, or the list it would stand in */
  to: (sights: TourSights) => string
}

const draft = ({ changes }: TourSights) => changes.find((c) => c.state === 'draft' && /brake-out/i.test(c.title)) ?? changes.find((c) => c.state === 'draft')
const waiting = ({ changes }: TourSights) => changes.find((c) => c.state === 'submitted' && c.life === 'submitted') ?? changes.find((c) => c.state === 'approved' || c.state === 'submitted')

/** From a gain that is stopped to a board that is proven: five screens, in the order in which the work is done. */
export const tourSteps: readonly TourStep[] = [
  {
    title: 'A gain is stopped',
    text: 'A controls engineer drafts a change on the block diagram. Every value typed is encoded to its register, decoded again, and the loops are computed from what the board will run.',
    look: 'Ball on the hill: this loop is unstable, and the change can’t be submitted. Each ruler’s hatched end says how far a value may go.',
    to: (s) => { const c = draft(s); return c ? paths.change(c.key) : paths.changes() },
  },
  {
    title: 'The check says why',
    text: 'The report holds every loop’s margins, the response, the poles, and the worst corner of motor, load, supply and temperature.',
    look: 'A question mark, or F1 beside it, explains each finding with its formula and source.',
    to: (s) => { const c = draft(s); return c ? paths.changeCheck(c.key) : paths.changes() },
  },
  {
    title: 'A change is signed',
    text: 'A peer reviewer reads what alters and what it does, row by row, and signs; a release manager signs second. Nobody signs what they wrote.',
    look: 'Before and after stand in one row, with the margin’s ruler beside. Signatures bind to the content’s hash.',
    to: (s) => { const c = waiting(s); return c ? paths.changeReview(c.key) : paths.changes() },
  },
  {
    title: 'The machine has a release',
    text: 'Releasing gives the machine its next version: for each joint the exact bytes, proven by a second decoder, with their SHA-256.',
    look: 'A builder takes one joint’s image or the whole kit from here.',
    to: ({ releases }) => { const r = releases.find((x) => x.state === 'current') ?? releases[0]; return r ? paths.release(r.machine, r.version) : paths.releases() },
  },
  {
    title: 'A board is verified',
    text: 'At the bench a board is flashed, read back, and every register compared. From then on it is known which numbers are on which board, and who put them there.',
    look: 'The board’s state says what is known and how. The ledger, top right, has each of these acts.',
    to: ({ boards }) => { const b = boards.find((x) => x.known === 'read back' && x.state === 'current') ?? boards[0]; return b ? paths.board(b.serial) : paths.boards() },
  },
]
