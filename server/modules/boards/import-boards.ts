import type { EntityManager } from '@mikro-orm/core'
import type { BoardTablePreview } from '../../../shared/contract/boards.ts'
import { DomainError } from '../../http/errors.ts'
import type { Machine } from '../machines/machine.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import type { Board } from './board.entity.ts'
import { findBoard } from './locate.ts'
import { previewImport, type Step } from './preview-import.ts'
import { putOnRecord } from './record-flash.ts'
import { seatBoard } from './seat-board.ts'
import { mustBeKept, type Speaker } from './speaker.ts'
import { tellOfWithdrawn } from './tell-of-withdrawn.ts'

/** The board of a row that records a flash; null for any other row. */
async function take(em: EntityManager, machine: Machine, step: Step, speaker: Speaker): Promise<Board | null> {
  const { row, joint, release, firmware, seats, flashes } = step
  if (flashes) return putOnRecord(em, { machine, joint: joint!, release: release!, serial: row.serial, readBack: null }, speaker)
  if (seats) {
    // A row before it may have put the board off its joint already.
    const known = await findBoard(em, row.serial)
    if (!known || known.machine.id !== machine.id || (known.joint?.id ?? null) !== (joint?.id ?? null)) await seatBoard(em, { machine, joint, serial: row.serial, note: 'imported', firmware }, speaker)
  }
  return null
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
  const flashed = new Map<Release, Board[]>()
  for (const step of steps) {
    const board = await take(em, machine, step, speaker)
    if (board) flashed.set(step.release!, [...(flashed.get(step.release!) ?? []), board])
  }
  for (const [release, boards] of flashed) await tellOfWithdrawn(em, release, boards, speaker)
  return preview
}
