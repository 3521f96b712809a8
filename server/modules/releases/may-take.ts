import type { EntityManager } from '@mikro-orm/core'
import type { ReleaseSummary } from '../../../shared/contract/releases.ts'
import { DomainError } from '../../http/errors.ts'
import type { HeldRole } from '../people/permissions.ts'
import { mayDownload } from './permissions.ts'
import { presentReleases } from './present.ts'
import type { Release } from './release.entity.ts'
import { standingConcessions, whyNoMore } from './standing-concessions.ts'

interface Asking {
  held: readonly HeldRole[]
  /** why, as the person wrote it; a superseded release is not fetched without */
  reason: string | undefined
  now: Date
}

/** What a download of a release is told by in the ledger and on the file. */
export interface Taking {
  state: ReleaseSummary['state']
  /** before the file's name: what is not current says so */
  mark: string
  reason: string | null
}

/** Why downloads of the release are stopped: its concessions that hold no more, in words. */
export const stopsOf = async (em: EntityManager, release: Release, now: Date): Promise<string[]> => (await standingConcessions(em, release, now)).flatMap((c) => whyNoMore(c) ?? [])

/**
 * May somebody fetch files of this release now, and how are they marked?
 *
 * @throws DomainError not-permitted, wrong-state (a concession that expired or is used up), invalid-request (a superseded release without a reason)
 */
export async function mustBeTakeable(em: EntityManager, release: Release, { held, reason: given, now }: Asking): Promise<Taking> {
  const [{ state }] = await presentReleases(em, [release])
  const allowed = mayDownload(release.machine.key, held, state)
  if (!allowed.allowed) throw new DomainError('not-permitted', `${allowed.why} Nothing was downloaded.`, { recorded: true })
  const [why] = await stopsOf(em, release, now)
  if (why) throw new DomainError('wrong-state', `${why}; it stops the downloads of ${release.machine.name} ${release.version}. Nothing was downloaded; renew it in a change that two people sign, or release without it.`)
  const reason = given?.trim().slice(0, 2000) || null
  if (state === 'superseded' && reason === null)
    throw new DomainError('invalid-request', `${release.machine.name} ${release.version} is superseded. Nothing was downloaded; say why you need it, or take the current release.`, { fields: [{ pointer: '/reason', detail: 'is needed for a superseded release' }] })
  return { state, mark: state === 'current' ? '' : `${state.toUpperCase()}_`, reason }
}
