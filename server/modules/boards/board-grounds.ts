import type { EntityManager } from '@mikro-orm/core'
import { newestRelease } from '../machines/current-release.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { Release } from '../releases/release.entity.ts'
import { Withdrawal } from '../releases/withdrawal.entity.ts'
import type { Board } from './board.entity.ts'
import { boardState, type BoardFacts, type StateTold } from './board-state.ts'

/** Releases that boards are judged by: those they hold and the newest of their machines. */
export interface Grounds {
  newest: ReadonlyMap<number, Release | null>
  held: ReadonlyMap<number, Release>
  withdrawn: ReadonlySet<number>
}

/** Reads the grounds of some boards, and of machines that have none, in a few queries. */
export async function groundsOf(em: EntityManager, boards: readonly Board[], machines: readonly Machine[] = []): Promise<Grounds> {
  const newest = new Map<number, Release | null>()
  for (const machine of [...machines, ...boards.map((b) => b.machine)]) if (!newest.has(machine.id)) newest.set(machine.id, await newestRelease(em, machine))
  const ids = [...new Set(boards.flatMap((b) => (b.release ? [b.release.id] : [])))]
  const held = new Map((await em.find(Release, { id: { $in: ids } })).map((r) => [r.id, r]))
  const all = [...ids, ...[...newest.values()].flatMap((r) => (r ? [r.id] : []))]
  const withdrawn = new Set((await em.find(Withdrawal, { release: { $in: all } })).map((w) => w.release.id))
  return { newest, held, withdrawn }
}

/** Name of a joint as a release has it, else as it was last called. */
export const jointName = (release: Release | null | undefined, joint: { key: string; name: string }) => release?.set.joints[joint.key]?.name ?? joint.name

export function factsOf(board: Board, grounds: Grounds): BoardFacts {
  const newest = grounds.newest.get(board.machine.id) ?? null
  const held = board.release ? grounds.held.get(board.release.id) : undefined
  const named = (release: Release | null | undefined, joint: { key: string } | null | undefined) => (joint && release?.set.joints[joint.key]?.board) || null
  const told = (release: Release | null | undefined) => (release ? { version: release.version, withdrawn: grounds.withdrawn.has(release.id) } : null)
  return {
    serial: board.serial,
    benchSet: board.benchSet ?? null,
    release: told(held),
    known: board.known ?? null,
    readBack: board.readBack ?? null,
    joint: board.joint ? jointName(newest, board.joint) : null,
    imageOf: board.imageOf ? jointName(newest, board.imageOf) : null,
    newest: told(newest),
    measuredOn: { held: named(held, board.imageOf), newest: named(newest, board.joint) },
  }
}

export const stateOf = (board: Board, grounds: Grounds): StateTold => boardState(factsOf(board, grounds))
