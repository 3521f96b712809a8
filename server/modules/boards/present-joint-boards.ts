import type { EntityManager } from '@mikro-orm/core'
import type { JointBoards } from '../../../shared/contract/boards.ts'
import { newestRelease } from '../machines/current-release.ts'
import { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { DomainError } from '../../http/errors.ts'
import { BoardEvent } from './board-event.entity.ts'
import { noBoard } from './board-state.ts'
import { Board } from './board.entity.ts'
import { presentBoards, presentEvent } from './present.ts'

const eventsShown = 50

/** @throws DomainError not-found */
export async function presentJointBoards(em: EntityManager, machine: Machine, key: string): Promise<JointBoards> {
  const joint = await em.findOne(Joint, { machine, key })
  if (!joint) throw new DomainError('not-found', `${machine.name} has no joint "${key}".`)
  const newest = await newestRelease(em, machine)
  const sitting = await em.findOne(Board, { joint }, { populate: ['machine', 'joint', 'imageOf'] })
  const board = sitting ? (await presentBoards(em, [sitting as Board]))[0] : null
  const events = await em.find(BoardEvent, { $or: [{ joint }, { from: joint }] }, { orderBy: { id: 'desc' }, limit: eventsShown, populate: ['board', 'joint', 'from', 'release'] })
  return {
    board,
    ...(board ? { state: board.state, why: board.why } : noBoard(newest?.set.joints[key]?.name ?? joint.name)),
    calibratedFor: newest?.set.joints[key]?.board ?? null,
    events: events.map((e) => ({ ...presentEvent(e as BoardEvent, newest), serial: e.board.serial })),
  }
}
