import { findingLevels, type CheckResult, type JointCheck, type JointFigures, type Verdict } from '../../../shared/contract/checks.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import type { Role } from '../../../shared/registers/roles.ts'
import type { NominalResult } from '../../jobs/analyses/nominal.ts'
import type { ToleranceResult } from '../../jobs/analyses/tolerance.ts'
import type { StoredOutcome } from '../../jobs/results.ts'
import { addressFindings } from './findings/addresses.ts'
import { busFindings } from './findings/buses.ts'
import { fold, type RawFinding } from './findings/finding.ts'
import type { JointContext } from './findings/joint-context.ts'
import { jointFindings } from './findings/joint-findings.ts'
import { firmwareFindings, noAnalysis, refusedFindings } from './findings/unusable.ts'
import { inputsHash } from './inputs-hash.ts'
import type { PreparedCheck, PreparedJoint, Side } from './prepare-check.ts'
import { pointerOf } from './resolve-joint.ts'

/** Results by hash, as far as they are known. */
export type KnownResults = ReadonlyMap<string, StoredOutcome>

type Judged = { kind: 'figures'; figures: JointFigures } | { kind: 'refused'; text: string } | { kind: 'not yet' }

/** Figures as put together before: joints built alike share one object. */
const together = new WeakMap<StoredOutcome, { swept: StoredOutcome | null; figures: JointFigures }>()

/** Figures of one side from its analyses; tolerances as far as they are known. */
export function figuresOf(side: Side & { kind: 'model' }, known: KnownResults): Judged {
  const nominal = known.get(side.asked.nominal.hash)
  if (!nominal) return { kind: 'not yet' }
  if (nominal.kind === 'refused') return { kind: 'refused', text: nominal.text }
  const swept = (side.asked.tolerance && known.get(side.asked.tolerance.hash)) ?? null
  const before = together.get(nominal)
  if (before && before.swept === swept) return { kind: 'figures', figures: before.figures }
  const tolerance = swept?.kind === 'result' ? (swept.result as ToleranceResult).figures : null
  const figures = { ...(nominal.result as NominalResult).figures, tolerance }
  together.set(nominal, { swept, figures })
  return { kind: 'figures', figures }
}

const figuresOrNull = (side: Side | null, known: KnownResults): JointFigures | null => {
  const judged = side?.kind === 'model' ? figuresOf(side, known) : null
  return judged?.kind === 'figures' ? judged.figures : null
}

/** Where the value of a role stands in the candidate. */
function pointerTo(check: PreparedCheck, side: Side & { kind: 'model' | 'no model' }, joint: string) {
  return (role: Role): string | undefined => {
    const parameter = side.schema.byRole.get(role)
    if (!parameter?.register) return undefined
    const own = pointerOf(check.inputs.candidate, joint, parameter.name)
    // A value that nobody gave stands nowhere yet: the family is where it would be given.
    return own === toPointer(['joints', joint]) ? toPointer(['families', side.settings.family, 'values', parameter.name]) : own
  }
}

function contextOf(check: PreparedCheck, { joint, family, then }: PreparedJoint, side: Side & { kind: 'model' | 'no model' }, figures: JointFigures | null): JointContext {
  return {
    family, joint, driveTrain: side.driveTrain, schema: side.schema, encoded: side.encoded, role: side.role, policy: check.inputs.policy,
    model: side.kind === 'model' ? side.model : null, figures, board: side.settings.board ?? null,
    recorded: then && then.kind !== 'refused' && then.settings.board ? { board: then.settings.board, role: then.role } : null,
    pointerTo: pointerTo(check, side, joint),
  }
}

/** Findings about one joint, as far as its analyses are known. */
export function findingsOf(check: PreparedCheck, prepared: PreparedJoint, known: KnownResults): RawFinding[] {
  const { joint, family, now } = prepared
  if (now.kind === 'refused') return refusedFindings(family, now)
  if (now.kind === 'no model')
    return [...jointFindings(contextOf(check, prepared, now, null)), noAnalysis(family, joint, `The firmware version has no parameter for ${now.missing.join(', ')}, so the loop can't be analysed.`, 'Name the roles in the schema (x-role); nobody can say that this loop is safe to try.')]
  const judged = figuresOf(now, known)
  const context = contextOf(check, prepared, now, judged.kind === 'figures' ? judged.figures : null)
  const findings = jointFindings(judged.kind === 'refused' ? { ...context, model: null } : context)
  if (judged.kind === 'refused') findings.push(noAnalysis(family, joint, judged.text, 'Correct the value it names; nothing about this loop was computed.'))
  const swept = now.asked.tolerance && known.get(now.asked.tolerance.hash)
  if (judged.kind === 'figures' && swept?.kind === 'refused') findings.push(noAnalysis(family, joint, swept.text, 'Correct the bound it names; nothing about the tolerances was computed.', 'closed loop over the tolerances'))
  return findings
}

const worstVerdict = (figures: readonly (JointFigures | null)[]): Verdict | null => {
  const verdicts = figures.flatMap((f) => (f ? [f.verdict] : []))
  return verdicts.find((v) => v === 'unstable') ?? verdicts.find((v) => v === 'on the boundary') ?? verdicts[0] ?? null
}

/**
 * The check of a change from what is known of its analyses: pure, cheap, the same for the same results.
 *
 * Joints that the change does not touch are checked under the present policy too.
 */
export function assembleCheck(check: PreparedCheck, known: KnownResults): CheckResult {
  const { inputs } = check
  const { candidate } = inputs
  const touched = new Set(check.joints.filter((j) => j.touched).map((j) => j.joint))
  const addressBytesOf = (joint: string) => (inputs.schemas[candidate.joints[joint].firmware]?.schema.image.addressWidth ?? 8) / 8
  const raw: RawFinding[] = [...addressFindings(candidate), ...busFindings(candidate, inputs.policy, addressBytesOf), ...firmwareFindings(inputs, touched)]
  const joints = check.joints.map((prepared): JointCheck => {
    raw.push(...findingsOf(check, prepared, known))
    const { joint, now, then } = prepared
    const figures = figuresOrNull(now, known)
    return { joint, touched: prepared.touched, candidate: figures, released: prepared.touched ? figuresOrNull(then, known) : figures, imageSha256: now.kind === 'refused' ? null : now.imageSha256 }
  })
  const findings = fold(raw)
  const counts = Object.fromEntries(findingLevels.map((level) => [level, findings.filter((f) => f.level === level).length])) as CheckResult['counts']
  return { inputsHash: inputsHash(inputs), modelVersion: inputs.modelVersion, policyNumber: inputs.policyNumber, joints, findings, counts, verdict: worstVerdict(joints.map((j) => j.candidate)) }
}
