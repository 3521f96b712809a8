import type { EntityManager } from '@mikro-orm/core'
import type { DriveTrain, MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { JointModel } from '../../control/model.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { changeKey, findChange } from '../changes/locate.ts'
import { setOf } from '../changes/read-set.ts'
import { stepInputsOf } from '../checks/analysis-inputs.ts'
import { modelOfJoint } from '../checks/joint-model.ts'
import { resolveJoint } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { newestRelease } from '../machines/current-release.ts'
import type { Evidence } from './evidence.entity.ts'

/** The set that a log is held against: of a change, or of the newest release. */
export interface Against {
  set: MachineSet
  /** "release 1.4.0", "change dunlin-47" */
  words: string
  change: Change | null
}

const open = ['draft', 'submitted', 'approved']

/**
 * What a log is held against: the change asked for, else its own while that is not released yet, else the newest release.
 *
 * @throws DomainError not-found
 */
export async function againstOf(em: EntityManager, evidence: Evidence, asked: string | undefined): Promise<Against> {
  const { machine } = evidence
  const named = asked === undefined || asked === '' || asked === 'release' ? null : await findChange(em, asked)
  if (asked && asked !== 'release' && named?.machine.id !== machine.id) throw new DomainError('not-found', `${machine.name} has no change "${asked}". Nothing was computed.`)
  const change = named ?? (asked === 'release' || !evidence.change || !open.includes(evidence.change.state) ? null : evidence.change)
  if (change) return { set: setOf(change.text), words: `change ${changeKey(change)}`, change }
  const newest = await newestRelease(em, machine)
  if (!newest) throw new DomainError('not-found', `${machine.name} has no release yet, so there is no model to hold the log against. Name a change.`)
  return { set: newest.set, words: `release ${newest.version}`, change: null }
}

/** The drive train of the log's joint. @throws DomainError not-found when the set has no such joint */
export function driveTrainOf(evidence: Evidence, { set, words }: Against): { family: string; driveTrain: DriveTrain } {
  if (!Object.hasOwn(set.joints, evidence.jointKey)) throw new DomainError('not-found', `${words} has no joint "${evidence.jointKey}". Nothing was computed; choose another state of the machine.`)
  const { family } = set.joints[evidence.jointKey]
  return { family, driveTrain: set.families[family].driveTrain }
}

export interface ModelOfLog {
  model: JointModel
  backlash: number
  source_resistance: number
}

/** The joint's model as its registers would hold it. @throws DomainError content-invalid, not-found */
export async function modelOf(em: EntityManager, evidence: Evidence, against: Against): Promise<ModelOfLog> {
  const { driveTrain } = driveTrainOf(evidence, against)
  const { schemas } = await schemasFor(em, against.set)
  const resolved = resolveJoint(against.set, evidence.jointKey, new Map(Object.entries(schemas)), 0)
  if (resolved.kind === 'refused') throw new DomainError('content-invalid', `The values of ${evidence.jointKey} in ${against.words} can't be encoded, so nothing was predicted.`, { fields: resolved.problems })
  const made = modelOfJoint(resolved.schema, resolved.encoded.decoded, driveTrain)
  if (made.kind === 'missing') throw new DomainError('content-invalid', `The firmware of ${evidence.jointKey} in ${against.words} has no ${made.roles.join(', ')}, so nothing was predicted.`)
  const { backlash, source_resistance } = stepInputsOf(driveTrain, made.model)
  return { model: made.model, backlash, source_resistance }
}
