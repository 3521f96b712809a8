import type { EntityManager } from '@mikro-orm/core'
import type { CheckResult } from '../../../shared/contract/checks.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { takeEvidence, type Change } from '../changes/change.entity.ts'
import { checkChange } from '../checks/check-change.ts'
import { contentOf } from '../reviews/content-of.ts'

/** The slow half: the check of a submitted change, whose content is about to alter by its evidence. Null for a draft, which has no hash yet. */
export const checkForEvidence = async (services: Services, em: EntityManager, change: Change | null | undefined): Promise<CheckResult | null> =>
  change?.state === 'submitted' ? (await checkChange(services, em, change)).result : null

/**
 * Gives a submitted change the hash of its content with its evidence as it stands now, inside the transaction that altered it.
 *
 * @throws DomainError wrong-state when the change moved since its check was taken
 */
export async function renewContent(em: EntityManager, change: Change, check: CheckResult | null, now: Date): Promise<void> {
  if (change.state === 'draft') return
  if (!check) throw new DomainError('wrong-state', `Change ${change.number} was submitted meanwhile. Nothing was altered; do it again.`)
  await em.flush()
  takeEvidence(change, (await contentOf(em, change, check)).hash, now)
}
