import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { isWithdrawn } from '../machines/current-release.ts'
import type { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import { overdrawnBy } from '../releases/standing-concessions.ts'
import { flash, type Board } from './board.entity.ts'
import type { ComparedDump } from './compare-dump.ts'
import { firmwareIn } from './locate.ts'
import { boardOf, seatAt } from './seat-board.ts'
import { tell, type Speaker } from './speaker.ts'
import { takeReadBack } from './take-read-back.ts'
import { tellOfWithdrawn } from './tell-of-withdrawn.ts'

export interface Flash {
  machine: Machine
  joint: Joint
  release: Release
  serial: string
  /** the dump read back after it, compared already with this release at this joint */
  readBack: ComparedDump | null
}

/** A concession for a number of boards is no concession for one more. @throws DomainError wrong-state, recorded in the ledger */
async function mustBeConceded(em: EntityManager, { release, joint, serial, board }: { release: Release; joint: Joint; serial: string; board: number | null }) {
  const overdrawn = await overdrawnBy(em, release, joint.key, board)
  if (!overdrawn) return
  const { characteristic, limit, count } = overdrawn
  throw new DomainError('wrong-state', `The concession for ${characteristic} (${limit}) was for ${count} ${count === 1 ? 'board' : 'boards'} with ${release.version}, and as many are on record; ${serial} would be one more. The flash was not recorded. Keep ${serial} off ${joint.name} until the concession is renewed in a change that two people sign; if it holds these bytes already, its read-back puts that on record.`, { recorded: true })
}

/**
 * Records that a board was flashed with a release at a joint, with its read-back when there is one.
 *
 * It records what happened, be the release withdrawn or outdated: the state says so, and the release managers are told of a withdrawn one.
 * The board that sat at the joint leaves it.
 *
 * @throws DomainError wrong-state for a retired board or machine, or one board more than a concession is for; not-permitted when the board is on record where the speaker may not record
 */
export async function recordFlash(em: EntityManager, asked: Flash, speaker: Speaker): Promise<Board> {
  const board = await putOnRecord(em, asked, speaker)
  await tellOfWithdrawn(em, asked.release, [board], speaker)
  return board
}

/** One flash on record, nobody told by mail yet. @throws DomainError as recordFlash */
export async function putOnRecord(em: EntityManager, { machine, joint, release, serial, readBack }: Flash, speaker: Speaker): Promise<Board> {
  const firmware = firmwareIn(release, joint, '/joint')
  const { board, isNew } = await boardOf(em, machine, serial, speaker)
  await mustBeConceded(em, { release, joint, serial, board: isNew ? null : board.id })
  const { moved, from } = await seatAt(em, board, machine, joint, speaker)
  if (moved && !isNew) await tell(em, board, speaker, { kind: 'moved', joint, from })
  flash(board, { release, imageOf: joint, firmware }, { by: speaker.person.name, at: speaker.now })
  await tell(em, board, speaker, { kind: 'flash recorded', joint, release, details: { firmware, ...((await isWithdrawn(em, release)) ? { withdrawn: true } : {}), readBack: readBack ? readBack.result.verdict : 'none' } })
  if (readBack) await takeReadBack(em, board, readBack, speaker)
  return board
}
