import type { EntityManager } from '@mikro-orm/core'
import type { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { takeBenchSet, type Board } from './board.entity.ts'
import { boardOf, seatAt } from './seat-board.ts'
import { tell, type Speaker } from './speaker.ts'

export interface BenchSet {
  machine: Machine
  joint: Joint
  serial: string
  /** key of the change whose unreleased image it is given */
  change: string
  imageSha256: string
}

/**
 * Records that a board is given the unreleased image of a change at a joint. Whoever hands the image out has asked whether it may be.
 *
 * @throws DomainError wrong-state for a retired board or machine; not-permitted when the board is on record where the speaker may not record
 */
export async function recordBenchSet(em: EntityManager, { machine, joint, serial, change, imageSha256 }: BenchSet, speaker: Speaker): Promise<Board> {
  const { board, isNew } = await boardOf(em, machine, serial, speaker)
  const { moved, from } = await seatAt(em, board, machine, joint, speaker)
  if (moved && !isNew) await tell(em, board, speaker, { kind: 'moved', joint, from })
  takeBenchSet(board, change, { by: speaker.person.name, at: speaker.now })
  await tell(em, board, speaker, { kind: 'bench set', joint, note: `unreleased set of change ${change}`, details: { change, imageSha256 } })
  return board
}
