import type { EntityManager } from '@mikro-orm/core'
import { DomainError } from '../../http/errors.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import type { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { Person } from '../people/person.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import type { ReadBackResult, BoardEventKind } from '../../../shared/contract/boards.ts'
import { BoardEvent } from './board-event.entity.ts'
import type { Board } from './board.entity.ts'

/** Who says what was done at the bench, and when: a person, or a person's bench key. */
export interface Speaker {
  person: Person
  held: readonly HeldRole[]
  /** name of the bench key that spoke */
  benchKey: string | null
  now: Date
}

interface Said {
  kind: BoardEventKind
  joint?: Joint | null
  from?: Joint | null
  release?: Release | null
  note?: string
  readBack?: ReadBackResult
  dump?: Uint8Array
  /** for the ledger, beside what the event says */
  details?: Record<string, unknown>
}

const actOf: Record<BoardEventKind, string> = {
  added: 'board added',
  'flash recorded': 'flash recorded',
  'read-back verified': 'read-back verified',
  'read-back differs': 'read-back differs',
  moved: 'board moved',
  'bench set': 'bench set on board',
  retired: 'board retired',
}

/** Writes one step of a board's life: into its history and into the ledger. */
export async function tell(em: EntityManager, board: Board, speaker: Speaker, said: Said): Promise<void> {
  const { person, now, benchKey } = speaker
  const { kind, joint = null, from = null, release = null, note = '', readBack = null, dump = null, details = {} } = said
  em.create(BoardEvent, { board, kind, at: now, person: em.getReference(Person, person.id), personName: person.name, benchKey, joint, from, release, note, readBack, dump })
  await appendEntry(em, {
    at: now,
    person,
    act: actOf[kind],
    subject: { machine: board.machine.key, board: board.serial, ...(joint ? { joint: joint.key } : {}), ...(release ? { release: release.version } : {}) },
    details: { ...(from ? { from: from.key } : {}), ...(note ? { note } : {}), ...(benchKey ? { benchKey } : {}), ...details },
  })
}

/** A board recorded on a machine where the speaker may not record stays as it is. */
export function mustReach(speaker: Speaker, board: Board, machine: Machine) {
  if (board.machine.id === machine.id || may(speaker.held, 'record flashes', board.machine.key).allowed) return
  throw new DomainError('not-permitted', `Board ${board.serial} is on record elsewhere, where you may not record. Nothing was recorded; ask somebody who may to take it off there.`, { recorded: true })
}

export function mustBeKept(machine: Machine) {
  if (machine.retiredAt) throw new DomainError('wrong-state', `${machine.name} is retired. Nothing was recorded.`)
}
