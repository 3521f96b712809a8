import type { EntityManager } from '@mikro-orm/core'
import type { ReleaseSummary } from '../../../shared/contract/releases.ts'
import { DomainError } from '../../http/errors.ts'
import type { HeldRole } from '../people/permissions.ts'
import { mayDownload } from './permissions.ts'
import { presentReleases } from './present.ts'
import type { Release } from './release.entity.ts'
import { expiredAt, standingConcessions } from './standing-concessions.ts'

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

/**
 * May somebody fetch files of this release now, and how are they marked?
 *
 * @throws DomainError not-permitted, wrong-state (an expired concession), invalid-request (a superseded release without a reason)
 */
export async function mustBeTakeable(em: EntityManager, release: Release, { held, reason: given, now }: Asking): Promise<Taking> {
  const [{ state }] = await presentReleases(em, [release])
  const allowed = mayDownload(release.machine.key, held, state)
  if (!allowed.allowed) throw new DomainError('not-permitted', `${allowed.why} Nothing was downloaded.`, { recorded: true })
  await em.populate(release, ['content'] as never)
  const [expired] = expiredAt(standingConcessions(release), now)
  if (expired)
    throw new DomainError('wrong-state', `The concession for ${expired.characteristic} (${expired.limit}) held until ${expired.until}; it stops the downloads of ${release.machine.name} ${release.version}. Nothing was downloaded; renew it in a change that two people sign, or release without it.`)
  const reason = given?.trim().slice(0, 2000) || null
  if (state === 'superseded' && reason === null)
    throw new DomainError('invalid-request', `${release.machine.name} ${release.version} is superseded. Nothing was downloaded; say why you need it, or take the current release.`, { fields: [{ pointer: '/reason', detail: 'is needed for a superseded release' }] })
  return { state, mark: state === 'current' ? '' : `${state.toUpperCase()}_`, reason }
}
