import type { EntityManager } from '@mikro-orm/core'
import type { BoardEventView, BoardPlace, BoardSummary, BoardView } from '../../../shared/contract/boards.ts'
import type { Allowed } from '../../../shared/contract/people.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import type { Release } from '../releases/release.entity.ts'
import { BoardEvent } from './board-event.entity.ts'
import type { Board } from './board.entity.ts'
import { groundsOf, jointName, stateOf, type Grounds } from './board-grounds.ts'

function placeOf(joint: { key: string; name: string }, newest: Release | null): BoardPlace {
  const settings = newest?.set.joints[joint.key]
  return { key: joint.key, name: settings?.name ?? joint.name, bus: settings ? (newest!.set.buses[settings.bus]?.name ?? settings.bus) : null, address: settings?.address ?? null }
}

export function summariseBoard(board: Board, grounds: Grounds): BoardSummary {
  const newest = grounds.newest.get(board.machine.id) ?? null
  const held = board.release ? grounds.held.get(board.release.id) : undefined
  const apart = board.imageOf && board.joint && board.imageOf.id !== board.joint.id
  return {
    serial: board.serial,
    machine: board.machine.key,
    machineName: board.machine.name,
    joint: board.joint ? placeOf(board.joint, newest) : null,
    firmware: board.firmware ?? null,
    release: held?.version ?? null,
    imageOf: apart ? jointName(newest, board.imageOf!) : null,
    known: board.known ?? null,
    knownAt: board.knownAt?.toISOString() ?? null,
    knownBy: board.knownBy ?? null,
    ...stateOf(board, grounds),
    retired: Boolean(board.retiredAt),
  }
}

/** Boards in one order: by machine, then as serial numbers are read. */
export async function presentBoards(em: EntityManager, boards: readonly Board[]): Promise<BoardSummary[]> {
  const grounds = await groundsOf(em, boards)
  return boards.map((b) => summariseBoard(b, grounds)).sort((a, b) => a.machine.localeCompare(b.machine, 'en') || a.serial.localeCompare(b.serial, 'en', { numeric: true }))
}

export const presentEvent = (e: BoardEvent, newest: Release | null): BoardEventView => ({
  id: e.id,
  kind: e.kind,
  at: e.at.toISOString(),
  person: e.personName,
  benchKey: e.benchKey ?? null,
  joint: e.joint ? { key: e.joint.key, name: jointName(newest, e.joint) } : null,
  from: e.from ? jointName(newest, e.from) : null,
  release: e.release?.version ?? null,
  note: e.note,
  readBack: e.readBack ?? null,
})

const eventsShown = 500

export async function presentBoard(em: EntityManager, board: Board, held: readonly HeldRole[]): Promise<BoardView> {
  const grounds = await groundsOf(em, [board])
  const newest = grounds.newest.get(board.machine.id) ?? null
  const events = await em.find(BoardEvent, { board }, { orderBy: { id: 'desc' }, limit: eventsShown, populate: ['joint', 'from', 'release'] })
  const retired: Allowed | null = board.retiredAt ? { allowed: false, why: `Board ${board.serial} is retired.` } : null
  const role = retired ?? may(held, 'record flashes', board.machine.key)
  const nowhere: Allowed = { allowed: false, why: 'It sits at no joint and holds nothing on record; record where it sits first.' }
  return {
    ...summariseBoard(board, grounds),
    events: events.map((e) => presentEvent(e as BoardEvent, newest)),
    newest: newest && !grounds.withdrawn.has(newest.id) ? newest.version : null,
    lastReadBack: events.find((e) => e.readBack)?.readBack ?? null,
    may: { record: role, readBack: role.allowed && !board.joint && !board.imageOf ? nowhere : role, move: role, retire: role },
  }
}
