import type { EntityManager } from '@mikro-orm/core'
import { Person } from '../people/person.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import { BoardEvent } from './board-event.entity.ts'
import { Board } from './board.entity.ts'

/** Boards in use that hold a release, as known. */
export const boardsHolding = (em: EntityManager, release: Release): Promise<Board[]> => em.find(Board, { release, retiredAt: null }, { populate: ['joint', 'machine'], orderBy: { serialKey: 'asc' } }) as Promise<Board[]>

/** Everybody who recorded a flash of a release, or whose bench key did, and can still sign in. */
export async function whoFlashed(em: EntityManager, release: Release): Promise<Person[]> {
  const events = await em.find(BoardEvent, { release, kind: 'flash recorded' }, { fields: ['person'] })
  return em.find(Person, { id: { $in: [...new Set(events.map((e) => e.person.id))] }, disabledAt: null }, { orderBy: { id: 'asc' } })
}

/** "H-0258 at R3 yaw": the boards of a mail or a list, one a line. */
export const boardLines = (boards: readonly Board[]): string => boards.map((b) => `  ${b.serial}${b.joint ? ` at ${b.joint.name}` : ', off its joint'}`).join('\n')
