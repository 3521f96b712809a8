import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { retire, sameSerial, type Board } from './board.entity.ts'
import { tell, type Speaker } from './speaker.ts'

/**
 * Takes a board out of use for good: broken, lost, scrapped. It leaves its joint; its history stays.
 *
 * @throws DomainError invalid-request when the serial number typed again is another one; wrong-state when it is retired
 */
export async function retireBoard(em: EntityManager, board: Board, { serial, reason }: { serial: string; reason: string }, speaker: Speaker): Promise<Board> {
  if (!sameSerial(serial.trim(), board.serial)) throw new DomainError('invalid-request', `The serial number typed is not this board's. Nothing was recorded; type ${board.serial} to retire it.`, { fields: [{ pointer: '/serial', detail: `is not ${board.serial}` }] })
  const from = board.joint ?? null
  retire(board, speaker.now)
  await tell(em, board, speaker, { kind: 'retired', from, note: reason.trim() })
  return board
}
