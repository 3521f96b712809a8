import type { EntityManager } from '@mikro-orm/core'
import type { CheckResult } from '../../../shared/contract/checks.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { MODEL_VERSION } from '../../control/model-version.ts'
import type { Services } from '../../http/services.ts'
import { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { policyInForce } from '../policy/policy-in-force.ts'
import type { CheckInputs } from './check-inputs.ts'
import { CheckReport } from './check-report.entity.ts'
import { inputsHash } from './inputs-hash.ts'

/** Everything the check of a change depends on, as it stands now. */
export async function gatherInputs(em: EntityManager, change: Change): Promise<CheckInputs> {
  const candidate = setOf(change.text)
  const base = change.baseRelease?.set ?? emptySet()
  const policy = await policyInForce(em, change.machine)
  const loaded = await schemasFor(em, { ...candidate, joints: { ...prefixed(base.joints), ...candidate.joints } })
  return { modelVersion: MODEL_VERSION, policyNumber: policy.number, policy: policy.content, candidate, base, schemas: loaded.documents, firmwareStates: loaded.states }
}

/** Joints of the base under keys that the candidate cannot have, so that both contribute their firmware versions. */
const prefixed = <T>(joints: Record<string, T>): Record<string, T> => Object.fromEntries(Object.entries(joints).map(([k, v]) => [`${k}~base`, v]))

/** The check of a change as it stands: from the store when its inputs were checked before, else computed and stored. */
export async function checkChange(services: Services, em: EntityManager, change: Change): Promise<{ result: CheckResult; checkedAt: Date }> {
  const inputs = await gatherInputs(em, change)
  const hash = inputsHash(inputs)
  const stored = await em.findOne(CheckReport, { change, inputsHash: hash })
  if (stored) return { result: stored.result, checkedAt: stored.createdAt }
  const result = await services.checks.run(inputs)
  const checkedAt = services.now()
  await services.orm.em.fork().transactional(async (tx) => {
    if (await tx.count(CheckReport, { change: change.id, inputsHash: hash })) return
    tx.create(CheckReport, { change: tx.getReference(Change, change.id), inputsHash: hash, result, createdAt: checkedAt })
  })
  return { result, checkedAt }
}
