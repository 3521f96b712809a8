import type { EntityManager } from '@mikro-orm/core'
import { boardStates, type BoardState, type JointBoard, type MachineBoards } from '../../../shared/contract/boards.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { numberedJoints } from '../machines/summarise.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { BoardEvent } from './board-event.entity.ts'
import { groundsOf, stateOf } from './board-grounds.ts'
import { noBoard } from './board-state.ts'
import { Board } from './board.entity.ts'
import { summariseBoard } from './present.ts'

/** The last read-back of each board since it was flashed last, by board. */
async function lastReadBacks(em: EntityManager, boards: readonly Board[]): Promise<Map<number, JointBoard['readBack']>> {
  const read = boards.filter((b) => b.readBack)
  const events = await em.find(BoardEvent, { board: { $in: read.map((b) => b.id) }, kind: { $in: ['read-back verified', 'read-back differs'] } }, { orderBy: { id: 'asc' }, fields: ['board', 'kind', 'at', 'personName'] })
  return new Map(events.map((e) => [e.board.id, { verdict: e.kind === 'read-back verified' ? 'equal' : 'differs', at: e.at.toISOString(), by: e.personName }]))
}

/** Every joint of a machine's newest release with the board there, and the boards at none. */
export async function presentMachineBoards(em: EntityManager, machine: Machine, held: readonly HeldRole[]): Promise<MachineBoards> {
  const boards = (await em.find(Board, { machine, retiredAt: null }, { populate: ['machine', 'joint', 'imageOf'] })) as Board[]
  const grounds = await groundsOf(em, boards, [machine])
  const newest = grounds.newest.get(machine.id) ?? null
  const withdrawn = newest !== null && grounds.withdrawn.has(newest.id)
  const numbered = await numberedJoints(em, newest)
  const readBacks = await lastReadBacks(em, boards)
  const at = new Map(boards.flatMap((b) => (b.joint ? [[b.joint.key, b] as const] : [])))
  const joints = Object.entries(newest?.set.joints ?? {}).map(([key, j]): JointBoard => {
    const board = at.get(key)
    return {
      joint: key, name: j.name, bus: newest!.set.buses[j.bus]?.name ?? j.bus, address: j.address, revision: numbered.get(key)?.revision ?? null,
      board: board ? summariseBoard(board, grounds) : null, calibratedFor: j.board ?? null, ...(board ? stateOf(board, grounds) : noBoard(j.name)), readBack: (board && readBacks.get(board.id)) ?? null,
    }
  })
  const counts = Object.fromEntries(boardStates.map((s) => [s, joints.filter((j) => j.state === s).length])) as Record<BoardState, number>
  return {
    machine: machine.key,
    machineName: machine.name,
    current: newest && !withdrawn ? { version: newest.version, sequence: newest.sequence, releasedAt: newest.releasedAt.toISOString() } : null,
    newest: newest && { version: newest.version, withdrawn },
    joints,
    off: boards.filter((b) => !b.joint || !Object.hasOwn(newest?.set.joints ?? {}, b.joint.key)).map((b) => summariseBoard(b, grounds)).sort((a, b) => a.serial.localeCompare(b.serial, 'en', { numeric: true })),
    counts,
    mayRecord: machine.retiredAt ? { allowed: false, why: `${machine.name} is retired.` } : may(held, 'record flashes', machine.key),
  }
}
