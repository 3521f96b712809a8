import type { EntityManager } from '@mikro-orm/core'
import type { Dump } from '../../../shared/contract/boards.ts'
import { DomainError } from '../../http/errors.ts'
import { newestRelease } from '../machines/current-release.ts'
import type { Joint } from '../machines/joint.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import type { Board } from './board.entity.ts'
import { compareDump, type ComparedDump } from './compare-dump.ts'
import { releaseNamed } from './locate.ts'
import { mustBeKept, type Speaker } from './speaker.ts'
import { takeReadBack } from './take-read-back.ts'

/** What a board is read back against: the release named, else the one it is recorded to hold, else the newest of its machine. */
async function expected(em: EntityManager, board: Board, version: string | undefined): Promise<{ release: Release; joint: Joint }> {
  const joint = board.imageOf ?? board.joint
  if (!joint) throw new DomainError('wrong-state', `Board ${board.serial} sits at no joint and holds nothing on record, so there is nothing to compare with. Nothing was recorded; record where it sits first.`)
  const release = version === undefined ? (board.release ?? (await newestRelease(em, board.machine))) : await releaseNamed(em, board.machine, version, '/release')
  if (!release) throw new DomainError('wrong-state', `${board.machine.name} has no release to compare with. Nothing was recorded.`)
  return { release: release as Release, joint: joint as Joint }
}

/** The slow half: reads and compares. @throws DomainError as compareDump does; wrong-state */
export async function prepareReadBack(em: EntityManager, board: Board, { dump, release: version }: { dump: Dump; release?: string }): Promise<ComparedDump> {
  mustBeKept(board.machine)
  const { release, joint } = await expected(em, board, version)
  return compareDump(em, { release, joint, dump, pointer: '/dump' })
}

/** Records what was read back from a board. @throws DomainError wrong-state for a retired board */
export async function verifyReadBack(em: EntityManager, board: Board, compared: ComparedDump, speaker: Speaker): Promise<Board> {
  await takeReadBack(em, board, compared, speaker)
  return board
}
