import type { DriveTrain, JointSettings, MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { EncodedImage } from '../../../shared/registers/encode-image.ts'
import type { Role } from '../../../shared/registers/roles.ts'
import type { JointModel } from '../../control/model.ts'
import { request, type AnalysisRequest } from '../../jobs/analyses/requests.ts'
import { heatInputsOf, stepInputsOf } from './analysis-inputs.ts'
import type { CheckInputs } from './check-inputs.ts'
import { modelOfJoint, type RoleReader } from './joint-model.ts'
import { resolveJoint, type ResolvedJoint } from './resolve-joint.ts'
import { toleranceBox } from './tolerance-box.ts'
import { touchedJoints } from './touched-joints.ts'

/** What is to be computed of one joint as its registers hold it. */
export interface Asked {
  nominal: AnalysisRequest & { kind: 'nominal' }
  /** null where nothing is bounded */
  tolerance: (AnalysisRequest & { kind: 'tolerance' }) | null
}

/** A joint of one of the two sets, up to where the computing begins. */
export type Side =
  | { kind: 'refused'; resolved: ResolvedJoint & { kind: 'refused' } }
  | ({ kind: 'no model'; missing: Role[] } & Encoded)
  | ({ kind: 'model'; model: JointModel; asked: Asked } & Encoded)

export interface Encoded {
  settings: JointSettings
  driveTrain: DriveTrain
  schema: ParameterSchema
  encoded: EncodedImage
  imageSha256: string
  role: RoleReader
}

export interface PreparedJoint {
  joint: string
  family: string
  touched: boolean
  now: Side
  /** null where the joint does not stand in the base */
  then: Side | null
}

export interface PreparedCheck {
  inputs: CheckInputs
  joints: PreparedJoint[]
}

/** Requests by the text of the model: joints built alike share one, hashed once. */
type Known = Map<string, Asked>

function askedOf(model: JointModel, driveTrain: DriveTrain, role: RoleReader, known: Known): Asked {
  const step = stepInputsOf(driveTrain, model)
  const heat = heatInputsOf(driveTrain, role)
  const bounds = toleranceBox(driveTrain)
  const key = JSON.stringify({ model, step, heat, bounds })
  const before = known.get(key)
  if (before) return before
  const asked: Asked = { nominal: request('nominal', { model, step, heat }), tolerance: bounds.length === 0 ? null : request('tolerance', { model, step, bounds }) }
  known.set(key, asked)
  return asked
}

function sideOf(set: MachineSet, resolved: ResolvedJoint, known: Known): Side {
  if (resolved.kind === 'refused') return { kind: 'refused', resolved }
  const settings = set.joints[resolved.joint]
  const { driveTrain } = set.families[settings.family]
  const made = modelOfJoint(resolved.schema, resolved.encoded.decoded, driveTrain)
  const encoded: Encoded = { settings, driveTrain, schema: resolved.schema, encoded: resolved.encoded, imageSha256: resolved.imageSha256, role: made.role }
  if (made.kind === 'missing') return { kind: 'no model', missing: made.roles, ...encoded }
  return { kind: 'model', model: made.model, asked: askedOf(made.model, driveTrain, made.role, known), ...encoded }
}

/** Every joint of the candidate through its registers and back, and the same joint of the base: all that a check needs before it computes. */
export function prepareCheck(inputs: CheckInputs): PreparedCheck {
  const { candidate, base } = inputs
  const schemas = new Map(Object.entries(inputs.schemas).map(([name, { schema }]) => [name, schema]))
  const resolveAll = (set: MachineSet) => new Map(Object.keys(set.joints).map((joint) => [joint, resolveJoint(set, joint, schemas, 0)]))
  const resolved = resolveAll(candidate)
  const resolvedBase = resolveAll(base)
  const touched = new Set(touchedJoints(candidate, base, resolved, resolvedBase))
  const known: Known = new Map()
  return {
    inputs,
    joints: [...resolved].map(([joint, now]) => {
      const then = resolvedBase.get(joint)
      return { joint, family: candidate.joints[joint].family, touched: touched.has(joint), now: sideOf(candidate, now, known), then: then ? sideOf(base, then, known) : null }
    }),
  }
}

const sidesOf = ({ joints }: PreparedCheck): (Side & { kind: 'model' })[] => joints.flatMap((j) => [j.now, j.then].filter((s): s is Side & { kind: 'model' } => s?.kind === 'model'))

const once = <T extends AnalysisRequest>(asked: readonly (T | null)[]): T[] => [...new Map(asked.flatMap((a) => (a ? [[a.hash, a] as const] : []))).values()]

/** What the nominal findings need. */
export const nominalRequests = (check: PreparedCheck) => once(sidesOf(check).map((s) => s.asked.nominal))

/** What the findings over the tolerances need besides. */
export const toleranceRequests = (check: PreparedCheck) => once(sidesOf(check).map((s) => s.asked.tolerance))
