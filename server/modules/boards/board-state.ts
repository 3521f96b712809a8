import type { BoardState, HowKnown } from '../../../shared/contract/boards.ts'
import { sameSerial } from './board.entity.ts'

/** What the state of a board follows from. Names are as people read them. */
export interface BoardFacts {
  serial: string
  /** change whose unreleased image it was given and that no read-back has cleared */
  benchSet: string | null
  /** release held, as known */
  release: { version: string; withdrawn: boolean } | null
  known: HowKnown | null
  /** of the last read-back since it was flashed */
  readBack: 'equal' | 'differs' | null
  /** joint where it sits; null: off its joint */
  joint: string | null
  /** joint whose image it holds */
  imageOf: string | null
  /** newest release of the machine, withdrawn or not */
  newest: { version: string; withdrawn: boolean } | null
  /** board that the release held, and the newest, were measured on at these joints; null: on none in particular */
  measuredOn: { held: string | null; newest: string | null }
}

export interface StateTold {
  state: BoardState
  /** one sentence */
  why: string
}

/**
 * The state of a board, told by what matters most first at the bench.
 *
 * A bench set stays until a read-back equals a release. A withdrawn release comes before everything else that is known; then bytes that
 * are not what was recorded, then values measured elsewhere, then age.
 */
export function boardState(facts: BoardFacts): StateTold {
  const { release, newest, joint } = facts
  if (facts.benchSet !== null) return { state: 'bench set on board', why: `It was given the unreleased set of change ${facts.benchSet}; a read-back that equals a release clears this.` }
  if (release?.withdrawn) return { state: 'withdrawn release on board', why: `It holds ${release.version}, which is withdrawn: it must not run with it.` }
  if (facts.readBack === 'differs') return { state: 'read-back differs', why: `Its last read-back is not ${release ? release.version : 'what was expected'}.` }
  const elsewhere = notCalibrated(facts)
  if (elsewhere !== null) return { state: 'not calibrated for this joint', why: elsewhere }
  if (release === null) return { state: 'unknown', why: joint === null ? 'Nothing is recorded of what it holds.' : `It sits at ${joint}; what it holds is not recorded.` }
  if (newest !== null && newest.version !== release.version)
    return { state: 'outdated', why: newest.withdrawn ? `It holds ${release.version}; the newer ${newest.version} is withdrawn, so it waits for the next release.` : `It holds ${release.version}; ${newest.version} is newer.` }
  return { state: 'current', why: facts.known === 'read back' ? `It holds ${release.version}, as read back.` : `It holds ${release.version} as recorded; it was not read back.` }
}

/** Why the values do not belong to this board at this joint; null when they do, or when it sits nowhere. */
function notCalibrated({ serial, joint, imageOf, release, newest, measuredOn }: BoardFacts): string | null {
  if (joint === null) return null
  if (imageOf !== null && imageOf !== joint) return `It sits at ${joint} but holds the image of ${imageOf}.`
  const another = (named: string | null): named is string => named !== null && !sameSerial(named, serial)
  if (another(measuredOn.newest)) return `${newest?.version ?? 'The newest release'} holds values for ${joint} that were measured on ${measuredOn.newest}, not on this board.`
  if (another(measuredOn.held)) return `It holds values of ${release?.version ?? 'a release'} that were measured on ${measuredOn.held}, not on this board.`
  return null
}

/** State of a joint at which no board is recorded. */
export const noBoard = (joint: string): StateTold => ({ state: 'unknown', why: `No board is recorded at ${joint}.` })
