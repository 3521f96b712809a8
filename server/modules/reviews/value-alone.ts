import type { DiffView } from '../../../shared/contract/reviews.ts'
import { effectiveValues } from '../../../shared/parameters/effective.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { withValueAt, toPointer } from '../../../shared/parameters/paths.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { JointModel } from '../../control/model.ts'
import { request, type AnalysisRequest } from '../../jobs/analyses/requests.ts'
import { heatInputsOf, stepInputsOf } from '../checks/analysis-inputs.ts'
import { modelOfJoint } from '../checks/joint-model.ts'
import type { PreparedCheck } from '../checks/prepare-check.ts'
import { resolveJoint } from '../checks/resolve-joint.ts'

type Nominal = AnalysisRequest & { kind: 'nominal' }

/** One joint as released, and the same with a single value of the candidate. */
export interface Trial {
  joint: string
  before: Nominal
  after: Nominal
  /** settling wanted of a step, s */
  settlingTarget: number | null
}

/** A row with what is to be computed for it, or the reason why there is nothing. */
export type RowPlan = { row: string } & ({ kind: 'trials'; trials: Trial[] } | { kind: 'none'; why: string })

/** Joints that differ otherwise than by the row's value each have an effect of their own; the first few distinct ones are computed. */
const distinctAtMost = 4
/** Analyses for one change at most; later rows say that they are not computed. */
const trialsAtMost = 400

interface Altered {
  row: string
  joints: string[]
  /** the released set with the value alone altered for a joint; a text says why there is none */
  alone(joint: string): MachineSet | string
}

const nominalOf = (set: MachineSet, joint: string, schemas: ReadonlyMap<string, ParameterSchema>): { request: Nominal; model: JointModel } | string => {
  const resolved = resolveJoint(set, joint, schemas, 0)
  if (resolved.kind === 'refused') return `alone it can't be encoded: ${resolved.problems[0].detail}`
  const { driveTrain } = set.families[set.joints[joint].family]
  const made = modelOfJoint(resolved.schema, resolved.encoded.decoded, driveTrain)
  if (made.kind === 'missing') return 'the firmware version lacks what the model of the loop needs'
  return { model: made.model, request: request('nominal', { model: made.model, step: stepInputsOf(driveTrain, made.model), heat: heatInputsOf(driveTrain, made.role) }) }
}

/** Values of the diff, each with the joints it holds for. */
function alteredValues(diff: DiffView, { inputs }: PreparedCheck): Altered[] {
  const { base, candidate } = inputs
  const one = (row: DiffView['groups'][number]['rows'][number], joints: string[]): Altered => ({
    row: row.key,
    joints,
    alone(joint) {
      if (row.register === null) return 'it is no value in a register'
      if (row.after === null) return 'the firmware version of the candidate has no such value'
      const released = inputs.schemas[base.joints[joint].firmware]?.schema
      const schema = inputs.schemas[candidate.joints[joint].firmware]?.schema
      if (!released?.byName.has(row.parameter)) return 'the released firmware version has no such value'
      if (!schema || released.byName.get(row.parameter)!.role === 'bus.address') return 'it is no value of the loop'
      const value = effectiveValues(candidate, joint, schema.parameters).find((v) => v.name === row.parameter)?.value
      return withValueAt(base, toPointer(['joints', joint, 'values', row.parameter]), value)
    },
  })
  return diff.groups.flatMap((g) => [
    ...g.rows.map((r) => one(r, g.joints.filter((j) => !g.own.some((o) => o.joint === j && o.rows.some((own) => own.parameter === r.parameter))))),
    ...g.own.flatMap((o) => o.rows.map((r) => one(r, [o.joint]))),
  ])
}

/** Letters of the drive trains, each with the joints released in that family. */
const alteredLetters = (diff: DiffView, { inputs: { base, candidate } }: PreparedCheck): Altered[] =>
  diff.driveTrains.flatMap(({ family, rows }) =>
    rows.map((row): Altered => ({
      row: row.key,
      joints: Object.keys(base.joints).filter((j) => base.joints[j].family === family),
      alone: () => (Object.hasOwn(candidate.families, family) ? withValueAt(base, row.pointer, candidate.families[family].driveTrain[row.field as keyof MachineSet['families'][string]['driveTrain']]) : 'the family goes'),
    })),
  )

function planRow({ row, joints, alone }: Altered, { inputs }: PreparedCheck, schemas: ReadonlyMap<string, ParameterSchema>, room: number): RowPlan {
  const none = (why: string): RowPlan => ({ row, kind: 'none', why })
  const released = joints.filter((j) => Object.hasOwn(inputs.base.joints, j))
  if (released.length === 0) return none('nothing is released to compare with')
  const trials = new Map<string, Trial>()
  let why = ''
  for (const joint of released) {
    const set = alone(joint)
    const [before, after] = [nominalOf(inputs.base, joint, schemas), typeof set === 'string' ? set : nominalOf(set, joint, schemas)]
    if (typeof before === 'string' || typeof after === 'string') {
      why ||= typeof after === 'string' ? after : 'the released joint has no model'
      continue
    }
    if (before.request.hash !== after.request.hash) trials.set(`${before.request.hash} ${after.request.hash}`, { joint, before: before.request, after: after.request, settlingTarget: inputs.base.families[inputs.base.joints[joint].family].driveTrain.settling_target ?? null })
    if (trials.size >= distinctAtMost) break
  }
  if (trials.size === 0) return none(why || 'no figure of the loop moves')
  if (trials.size > room) return none('not computed: too much alters at once')
  return { row, kind: 'trials', trials: [...trials.values()] }
}

/** What is to be computed to say what each altered value does alone: as released, with this one value of the candidate. */
export function planEffects(check: PreparedCheck, diff: DiffView): RowPlan[] {
  const schemas = new Map(Object.entries(check.inputs.schemas).map(([name, { schema }]) => [name, schema]))
  let room = trialsAtMost
  return [...alteredValues(diff, check), ...alteredLetters(diff, check)].map((altered) => {
    const plan = planRow(altered, check, schemas, room)
    if (plan.kind === 'trials') room -= plan.trials.length
    return plan
  })
}
