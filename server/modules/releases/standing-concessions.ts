import type { ConcessionRequest } from '../../../shared/contract/changes.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { notAsSigned } from './not-as-signed.ts'
import type { Release } from './release.entity.ts'

/**
 * The concessions that a release stands on, from the content that was signed.
 *
 * @param release  with its content loaded
 * @throws DomainError verification-failed when the stored content is not the one that was signed
 */
export function standingConcessions(release: Release): ConcessionRequest[] {
  if (sha256(release.content) !== release.contentHash) throw notAsSigned(release, 'The content', 'its stored text does not match the hash that the signatures bind to.')
  return (JSON.parse(release.content) as { concessions?: ConcessionRequest[] }).concessions ?? []
}

/** Those whose last day is over. A day ends at midnight UTC. */
export const expiredAt = (concessions: readonly ConcessionRequest[], now: Date): ConcessionRequest[] => concessions.filter((c) => c.until !== null && c.until < now.toISOString().slice(0, 10))
