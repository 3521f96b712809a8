import type { EntityManager } from '@mikro-orm/core'
import type { AskQuick, QuickView } from '../../../shared/contract/checks.ts'
import { applyEdits, type Edit } from '../../../shared/parameters/edits.ts'
import { emptySet, MachineSet } from '../../../shared/parameters/machine-set.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { problemsOf } from '../../http/validate.ts'
import { perform } from '../../jobs/task.ts'
import type { Change } from '../changes/change.entity.ts'
import { assembleCheck } from './assemble-check.ts'
import type { CheckInputs } from './check-inputs.ts'
import { gatherInputs } from './gather-inputs.ts'
import { hereIfQuick, worded } from './look-at-check.ts'
import { nominalRequests, prepareCheck } from './prepare-check.ts'

/** The set with one joint alone, and what that joint refers to; null when the set has no such joint, or its references lead nowhere. */
function withOneJoint(set: MachineSet, key: string): MachineSet | null {
  const joint = Object.hasOwn(set.joints, key) ? set.joints[key] : undefined
  if (!joint || !Object.hasOwn(set.families, joint.family) || !Object.hasOwn(set.buses, joint.bus)) return null
  return { buses: { [joint.bus]: set.buses[joint.bus] }, families: { [joint.family]: set.families[joint.family] }, joints: { [key]: joint } }
}

const refused = (detail: string, pointer: string) => new DomainError('content-invalid', 'The joint can not be checked with these values. Nothing was saved, and nothing is lost.', { fields: [{ pointer, detail }] })

/** The edits in a set of one joint: those of other joints have no place in it. @throws DomainError content-invalid */
function laid(set: MachineSet, joint: string, edits: readonly Edit[]): MachineSet {
  let edited: MachineSet
  try {
    edited = applyEdits(set, edits)
  } catch (error) {
    throw refused((error as Error).message, '/edits')
  }
  const one = withOneJoint(edited, joint)
  if (!one) throw refused(`with these edits there is no joint ${joint}, or its family or bus is gone`, '/joint')
  const [problem] = problemsOf(MachineSet, one)
  if (problem) throw refused(problem.detail, problem.pointer)
  return one
}

/**
 * What one joint would do with edits that are not saved yet: its nominal figures and the findings about it, within a few milliseconds, for the panel
 * beside the editor. Stores nothing, since most of what is typed is typed over at once.
 *
 * @throws DomainError content-invalid, too-many-requests
 */
export async function quickCheck(services: Services, em: EntityManager, change: Change, { joint, edits }: AskQuick, asker: number): Promise<QuickView> {
  const saved = await gatherInputs(em, change)
  const inputs: CheckInputs = { ...saved, candidate: laid(saved.candidate, joint, edits as Edit[]), base: withOneJoint(saved.base, joint) ?? emptySet() }
  const check = prepareCheck(inputs)
  const asked = nominalRequests(check)
  const here = hereIfQuick()
  const known = await services.checks.known(asked)
  const elsewhere = asked.filter((a) => {
    if (known.has(a.hash) || !here(a)) return !known.has(a.hash)
    known.set(a.hash, perform({ kind: 'nominal', inputs: a.inputs }))
    return false
  })
  if (elsewhere.length > 0) for (const [hash, outcome] of await services.checks.settle(elsewhere, { asker, urgent: true }).catch(worded)) known.set(hash, outcome)
  const result = assembleCheck(check, known)
  return { joint: result.joints[0], findings: result.findings.filter((f) => f.joints.includes(joint)) }
}
