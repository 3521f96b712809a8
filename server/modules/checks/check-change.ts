import type { EntityManager } from '@mikro-orm/core'
import type { CheckResult } from '../../../shared/contract/checks.ts'
import type { Services } from '../../http/services.ts'
import { Change } from '../changes/change.entity.ts'
import { assembleCheck } from './assemble-check.ts'
import { CheckReport } from './check-report.entity.ts'
import { prepareChange } from './gather-inputs.ts'
import { hereIfQuick, worded } from './look-at-check.ts'
import { packCheck, unpackCheck } from './pack-check.ts'
import { nominalRequests, toleranceRequests } from './prepare-check.ts'

/**
 * The whole check of a change as it stands, tolerances included: what a submission and every signature wait for.
 *
 * From the store when its inputs were checked before, else computed and stored.
 *
 * @throws DomainError too-many-requests, unexpected when it could not be computed
 */
export async function checkChange(services: Services, em: EntityManager, change: Change): Promise<{ result: CheckResult; checkedAt: Date }> {
  const { hash, check } = await prepareChange(em, change)
  const stored = await em.findOne(CheckReport, { change, inputsHash: hash })
  if (stored) return { result: unpackCheck(stored.result), checkedAt: stored.createdAt }
  const known = await services.checks.settle([...nominalRequests(check), ...toleranceRequests(check)], { asker: change.author.id, here: hereIfQuick() }).catch(worded)
  const result = assembleCheck(check, known)
  const checkedAt = services.now()
  await services.orm.em.fork().transactional(async (tx) => {
    if (await tx.count(CheckReport, { change: change.id, inputsHash: hash })) return
    tx.create(CheckReport, { change: tx.getReference(Change, change.id), inputsHash: hash, result: packCheck(result), createdAt: checkedAt })
  })
  return { result, checkedAt }
}
