import type { EntityManager } from '@mikro-orm/core'
import type { ConcessionRequest } from '../../../shared/contract/changes.ts'
import type { StandingConcession } from '../../../shared/contract/releases.ts'
import { BoardEvent } from '../boards/board-event.entity.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { Joint } from '../machines/joint.entity.ts'
import { notAsSigned } from './not-as-signed.ts'
import type { Release } from './release.entity.ts'

interface Signed {
  concessions?: ConcessionRequest[]
  check?: { findings?: { key: string; joints: string[] }[] }
}

/**
 * The concessions that a release stands on, from the content that was signed, each with the joints its finding is about; no joints stand for
 * every joint (a finding about a bus).
 *
 * @param release  with its content loaded
 * @throws DomainError verification-failed when the stored content is not the one that was signed
 */
function signedConcessions(release: Release): { concession: ConcessionRequest; joints: readonly string[] }[] {
  if (sha256(release.content) !== release.contentHash) throw notAsSigned(release, 'The content', 'its stored text does not match the hash that the signatures bind to.')
  const { concessions = [], check } = JSON.parse(release.content) as Signed
  return concessions.map((concession) => ({ concession, joints: check?.findings?.find((f) => f.key === concession.finding)?.joints ?? [] }))
}

/** Boards that were flashed with the release at some of its joints, as recorded: each serial number counts once. No joints stand for all. */
async function boardsFlashed(em: EntityManager, release: Release, joints: readonly string[]): Promise<Set<number>> {
  const at = joints.length === 0 ? {} : { joint: { $in: (await em.find(Joint, { machine: release.machine, key: { $in: [...joints] } })).map((j) => j.id) } }
  return new Set((await em.find(BoardEvent, { release, kind: 'flash recorded', ...at })).map((e) => e.board.id))
}

/**
 * The concessions of a release as they stand now. A day ends at midnight UTC; a count is used up once as many boards are on record.
 *
 * @throws DomainError verification-failed
 */
export async function standingConcessions(em: EntityManager, release: Release, now: Date): Promise<StandingConcession[]> {
  await em.populate(release, ['content'] as never)
  const standing: StandingConcession[] = []
  for (const { concession, joints } of signedConcessions(release)) {
    const used = concession.count === null ? null : (await boardsFlashed(em, release, joints)).size
    const expired = concession.until !== null && concession.until < now.toISOString().slice(0, 10)
    const usedUp = concession.count !== null && used !== null && used >= concession.count
    standing.push({ ...concession, used, state: expired ? 'expired' : usedUp ? 'used up' : 'holds' })
  }
  return standing
}

/** How a concession that holds no more is told of; null while it holds. */
export function whyNoMore({ characteristic, limit, until, count, state }: StandingConcession): string | null {
  if (state === 'expired') return `The concession for ${characteristic} (${limit}) held until ${until}`
  return state === 'used up' ? `The concession for ${characteristic} (${limit}) was for ${count} ${count === 1 ? 'board' : 'boards'}, and as many are on record` : null
}

/**
 * The concession that one more board at this joint would overdraw; null when none would. A board that counts already may be flashed again.
 *
 * @param board  its row; null for a board not on record yet
 */
export async function overdrawnBy(em: EntityManager, release: Release, joint: string, board: number | null): Promise<ConcessionRequest | null> {
  await em.populate(release, ['content'] as never)
  for (const { concession, joints } of signedConcessions(release)) {
    if (concession.count === null || (joints.length > 0 && !joints.includes(joint))) continue
    const flashed = await boardsFlashed(em, release, joints)
    if ((board === null || !flashed.has(board)) && flashed.size >= concession.count) return concession
  }
  return null
}
