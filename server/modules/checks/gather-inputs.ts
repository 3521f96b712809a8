import type { EntityManager } from '@mikro-orm/core'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { MODEL_VERSION } from '../../control/model-version.ts'
import { Recent } from '../../jobs/recent.ts'
import type { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { policyInForce } from '../policy/policy-in-force.ts'
import type { CheckInputs } from './check-inputs.ts'
import { inputsHash } from './inputs-hash.ts'
import { prepareCheck, type PreparedCheck } from './prepare-check.ts'

/** Everything the check of a change depends on, as it stands now. */
export async function gatherInputs(em: EntityManager, change: Change): Promise<CheckInputs> {
  const candidate = setOf(change.text)
  const base = change.baseRelease?.set ?? emptySet()
  const policy = await policyInForce(em, change.machine)
  const loaded = await schemasFor(em, { ...candidate, joints: { ...prefixed(base.joints), ...candidate.joints } })
  return {
    modelVersion: MODEL_VERSION,
    policyNumber: policy.number,
    policy: policy.content,
    candidate,
    base,
    schemas: Object.fromEntries(Object.entries(loaded.schemas).map(([name, schema]) => [name, { schema, hash: loaded.hashes[name] }])),
    firmwareStates: loaded.states,
  }
}

/** Joints of the base under keys that the candidate cannot have, so that both contribute their firmware versions. */
const prefixed = <T>(joints: Record<string, T>): Record<string, T> => Object.fromEntries(Object.entries(joints).map(([k, v]) => [`${k}~base`, v]))

const prepared = new Recent<PreparedCheck>(16)

/** A change up to where the computing begins, with the hash of all it depends on. */
export async function prepareChange(em: EntityManager, change: Change): Promise<{ hash: string; check: PreparedCheck }> {
  const inputs = await gatherInputs(em, change)
  const hash = inputsHash(inputs)
  const before = prepared.get(hash)
  if (before) return { hash, check: before }
  const check = prepareCheck(inputs)
  prepared.set(hash, check)
  return { hash, check }
}
