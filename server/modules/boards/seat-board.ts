import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import type { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { Board, mustBeInUse, seat, serialKey } from './board.entity.ts'
import { findBoard } from './locate.ts'
import { mustBeKept, mustReach, tell, type Speaker } from './speaker.ts'

/** The board with this serial number, put on record when it is new; `isNew` tells. */
export async function boardOf(em: EntityManager, machine: Machine, serial: string, speaker: Speaker): Promise<{ board: Board; isNew: boolean }> {
  mustBeKept(machine)
  const known = await findBoard(em, serial)
  if (known) {
    mustReach(speaker, known, machine)
    return { board: known, isNew: false }
  }
  const board = em.create(Board, { serial, serialKey: serialKey(serial), machine, createdAt: speaker.now })
  await em.flush()
  return { board, isNew: true }
}

/** Frees a joint for another board. The board that sat there keeps what it holds. */
async function free(em: EntityManager, joint: Joint, by: Board, speaker: Speaker) {
  const sitting = await em.findOne(Board, { joint }, { populate: ['machine'] })
  if (!sitting || sitting.id === by.id) return
  seat(sitting as Board, sitting.machine, null)
  // Two boards never share a joint, not even within one flush.
  await em.flush()
  await tell(em, sitting as Board, speaker, { kind: 'moved', from: joint, note: `replaced by ${by.serial}` })
}

/** Puts a board at a joint, and whatever sat there off it. Returns whether it moved. */
export async function seatAt(em: EntityManager, board: Board, machine: Machine, joint: Joint | null, speaker: Speaker): Promise<{ moved: boolean; from: Joint | null }> {
  const from = board.joint ?? null
  if (board.machine.id === machine.id && (from?.id ?? null) === (joint?.id ?? null)) return { moved: false, from }
  mustBeInUse(board, 'moved')
  if (joint) await free(em, joint, board, speaker)
  seat(board, machine, joint)
  await em.flush()
  return { moved: true, from: from as Joint | null }
}

export interface Seating {
  machine: Machine
  joint: Joint | null
  serial: string
  note: string
  /** firmware on a board whose release is not known */
  firmware?: string | null
}

/**
 * Records where a board sits: at a joint, or off it. A new serial number is put on record. What it holds stays as known.
 *
 * @throws DomainError wrong-state when it sits there already or is retired; not-permitted when it is on record where the speaker may not record
 */
export async function seatBoard(em: EntityManager, { machine, joint, serial, note, firmware = null }: Seating, speaker: Speaker): Promise<Board> {
  const { board, isNew } = await boardOf(em, machine, serial, speaker)
  const { moved, from } = await seatAt(em, board, machine, joint, speaker)
  if (!moved && !isNew) throw new DomainError('wrong-state', `Board ${board.serial} is recorded ${joint ? `at ${joint.name}` : `off its joint`} already. Nothing was recorded.`)
  if (firmware !== null) board.firmware = firmware
  await tell(em, board, speaker, { kind: isNew ? 'added' : 'moved', joint, from, note, ...(firmware === null ? {} : { details: { firmware } }) })
  return board
}
