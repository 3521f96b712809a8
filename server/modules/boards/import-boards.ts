import type { EntityManager } from '@mikro-orm/core'
import type { BoardTablePreview } from '../../../shared/contract/boards.ts'
import { DomainError } from '../../http/errors.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { findBoard } from './locate.ts'
import { previewImport, type Step } from './preview-import.ts'
import { recordFlash } from './record-flash.ts'
import { seatBoard } from './seat-board.ts'
import { mustBeKept, type Speaker } from './speaker.ts'

async function take(em: EntityManager, machine: Machine, step: Step, speaker: Speaker) {
  const { row, joint, release, firmware, seats, flashes } = step
  if (flashes) await recordFlash(em, { machine, joint: joint!, release: release!, serial: row.serial, readBack: null }, speaker)
  else if (seats) {
    // A row before it may have put the board off its joint already.
    const known = await findBoard(em, row.serial)
    if (!known || known.machine.id !== machine.id || (known.joint?.id ?? null) !== (joint?.id ?? null)) await seatBoard(em, { machine, joint, serial: row.serial, note: 'imported', firmware }, speaker)
  }
}

/**
 * Imports a table of a machine's boards as it was previewed: every row, or none.
 *
 * @throws DomainError content-invalid naming each row that can't be taken; precondition-failed when something moved since the preview
 */
export async function importBoards(em: EntityManager, { machine, text, decidedOn }: { machine: Machine; text: string; decidedOn: string }, speaker: Speaker): Promise<BoardTablePreview> {
  mustBeKept(machine)
  const { preview, steps } = await previewImport(em, { machine, text, speaker })
  const bad = preview.rows.filter((r) => r.problem !== null)
  if (bad.length > 0)
    throw new DomainError('content-invalid', `${bad.length === 1 ? 'One row' : `${bad.length} rows`} can't be taken. Nothing was recorded; correct the file and choose it again.`, { fields: bad.map((r) => ({ pointer: '/text', detail: `line ${r.line}, ${r.serial.slice(0, 40)}: ${r.problem}` })) })
  if (preview.hash !== decidedOn) throw new DomainError('precondition-failed', 'Boards were recorded since you looked at the preview. Nothing was imported; look at it again.')
  for (const step of steps) await take(em, machine, step, speaker)
  return preview
}
