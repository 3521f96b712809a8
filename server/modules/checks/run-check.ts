import { findingLevels, type CheckResult, type Finding, type JointCheck, type JointFigures, type Verdict } from '../../../shared/contract/checks.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { expectParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { NumericError } from '../../control/errors.ts'
import type { CheckInputs } from './check-inputs.ts'
import { figuresOf } from './figures.ts'
import { addressFindings } from './findings/addresses.ts'
import { fold, type RawFinding } from './findings/finding.ts'
import { guardFindings, limitFindings } from './findings/limits.ts'
import { roundingFindings } from './findings/rounding.ts'
import { stabilityFinding } from './findings/stability.ts'
import { inputsHash } from './inputs-hash.ts'
import { modelOfJoint } from './joint-model.ts'
import { resolveJoint, type ResolvedJoint } from './resolve-joint.ts'
import { touchedJoints } from './touched-joints.ts'

const resolveAll = (set: MachineSet, schemas: ReadonlyMap<string, ParameterSchema>) => new Map(Object.keys(set.joints).map((joint) => [joint, resolveJoint(set, joint, schemas, 0)]))

/** Firmware versions that are no ground to release on: drafts never, retired ones not for what the change touches. */
function firmwareFindings(inputs: CheckInputs, touched: ReadonlySet<string>): RawFinding[] {
  return Object.entries(inputs.candidate.joints).flatMap(([joint, { firmware, family }]): RawFinding[] => {
    const state = inputs.firmwareStates[firmware]
    const base = { place: family, joint, kind: 'firmware version', value: null, limit: null, unit: '', source: 'product rule', pointer: `/joints/${joint}/firmware` }
    if (state === 'draft') return [{ ...base, level: 'block', text: `${firmware} is a draft.`, remedy: 'Its register map may still move; a release manager publishes it first.' }]
    if (state === 'retired') return [{ ...base, level: touched.has(joint) ? 'concession needed' : 'advise', text: `${firmware} is retired.`, remedy: 'Move the joint to a published version.' }]
    return []
  })
}

/** What keeps a joint from being analysed, as findings. */
function refusedFindings(place: string, resolved: ResolvedJoint & { kind: 'refused' }): RawFinding[] {
  return resolved.problems.map((p) => ({ place, joint: resolved.joint, kind: `value ${p.pointer.split('/').at(-1)}`, level: 'block', value: null, limit: null, unit: '', text: `${p.detail.replace(/\.$/, '')}.`, remedy: 'Nothing can be encoded for the joint; correct the value.', source: "the firmware version's schema", pointer: p.pointer }))
}

interface Analysis {
  figures: JointFigures | null
  findings: RawFinding[]
}

/** One joint: its values through the registers and back, and everything that is computed from them. */
function analyse(set: MachineSet, resolved: ResolvedJoint, policy: CheckInputs['policy'], known: Map<string, JointFigures>): Analysis {
  const { joint } = resolved
  const place = set.joints[joint].family
  if (resolved.kind === 'refused') return { figures: null, findings: refusedFindings(place, resolved) }
  const { driveTrain } = set.families[place]
  const made = modelOfJoint(resolved.schema, resolved.encoded.decoded, driveTrain)
  const findings = [
    ...limitFindings(place, joint, driveTrain, made.role),
    ...guardFindings(place, joint, driveTrain, made.role),
    ...roundingFindings(place, joint, resolved.schema, resolved.encoded, policy),
  ]
  const refuse = (text: string, remedy: string): Analysis => ({ figures: null, findings: [...findings, { place, joint, kind: 'closed loop', level: 'block', value: null, limit: null, unit: '', text, remedy, source: 'server/control/MODEL.md' }] })
  if (made.kind === 'missing') return refuse(`The firmware version has no parameter for ${made.roles.join(', ')}, so the loop can't be analysed.`, 'Name the roles in the schema (x-role); nobody can say that this loop is safe to try.')
  try {
    const key = JSON.stringify(made.model)
    const figures = known.get(key) ?? figuresOf(made.model)
    known.set(key, figures)
    return { figures, findings: [...findings, stabilityFinding(place, joint, figures)] }
  } catch (error) {
    if (!(error instanceof NumericError)) throw error
    return refuse(error.message, 'Correct the value it names; nothing about this loop was computed.')
  }
}

const worstVerdict = (figures: readonly (JointFigures | null)[]): Verdict | null => {
  const verdicts = figures.flatMap((f) => (f ? [f.verdict] : []))
  return verdicts.find((v) => v === 'unstable') ?? verdicts.find((v) => v === 'on the boundary') ?? verdicts[0] ?? null
}

/**
 * The check of a change: every joint of the candidate through its registers, the touched ones before and after.
 *
 * Joints that the change does not touch are checked under the present policy too.
 */
export function runCheck(inputs: CheckInputs): CheckResult {
  const schemas = new Map(Object.entries(inputs.schemas).map(([name, json]) => [name, expectParameterSchema(json)]))
  const { candidate, base, policy } = inputs
  const resolved = resolveAll(candidate, schemas)
  const resolvedBase = resolveAll(base, schemas)
  /** figures by model: joints built alike are computed once */
  const known = new Map<string, JointFigures>()
  const touched = new Set(touchedJoints(candidate, base, resolved, resolvedBase))
  const raw: RawFinding[] = [...addressFindings(candidate), ...firmwareFindings(inputs, touched)]
  const joints = Object.keys(candidate.joints).map((joint): JointCheck => {
    const now = resolved.get(joint)!
    const analysis = analyse(candidate, now, policy, known)
    raw.push(...analysis.findings)
    const then = resolvedBase.get(joint)
    const released = touched.has(joint) ? (then ? analyse(base, then, policy, known).figures : null) : analysis.figures
    return { joint, touched: touched.has(joint), candidate: analysis.figures, released, imageSha256: now.kind === 'resolved' ? now.imageSha256 : null }
  })
  const findings: Finding[] = fold(raw)
  const counts = Object.fromEntries(findingLevels.map((level) => [level, findings.filter((f) => f.level === level).length])) as CheckResult['counts']
  return { inputsHash: inputsHash(inputs), modelVersion: inputs.modelVersion, policyNumber: inputs.policyNumber, joints, findings, counts, verdict: worstVerdict(joints.map((j) => j.candidate)) }
}
