import type { Finding, JointFigures, MapParameter } from '../../../shared/contract/checks.ts'
import type { Proposal, RetuneGain } from '../../../shared/contract/proposals.ts'
import { applyEdits, type Edit } from '../../../shared/parameters/edits.ts'
import { valueAt } from '../../../shared/parameters/paths.ts'
import type { Parameter } from '../../../shared/registers/parameter-schema.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { findingsOf, figuresOf } from './assemble-check.ts'
import { fold } from './findings/finding.ts'
import { hereIfQuick, worded } from './look-at-check.ts'
import { placeOfLetter, roleOfLetter, unitOfLetter } from './map-parameters.ts'
import { prepareCheck, type PreparedCheck, type PreparedJoint, type Side } from './prepare-check.ts'
import { jointOf } from './report-joint.ts'

export interface ProposedGain {
  gain: RetuneGain
  /** SI */
  value: number
  rule: string
  source: string
}

/** A gain as a person would type it: four digits, inside what the firmware takes, a multiple where it wants one. */
function typed(parameter: Parameter, value: number): { value: number; held: boolean } {
  const { minimum, maximum, exclusiveMinimum, exclusiveMaximum, multipleOf } = parameter.bounds
  const low = Math.max(minimum ? Number(minimum.text) : -Infinity, exclusiveMinimum ? Number(exclusiveMinimum.text) * (1 + 1e-9) : -Infinity)
  const high = Math.min(maximum ? Number(maximum.text) : Infinity, exclusiveMaximum ? Number(exclusiveMaximum.text) * (1 - 1e-9) : Infinity)
  const wanted = Number(value.toPrecision(4))
  const inside = Math.min(high, Math.max(low, wanted))
  const step = multipleOf ? Number(multipleOf.text) : parameter.kind === 'integer' ? 1 : 0
  return { value: step > 0 ? Number((Math.round(inside / step) * step).toPrecision(12)) : inside, held: inside !== wanted }
}

/**
 * Gains as edits of the draft, with the check of what they would make. Nothing is applied.
 *
 * @param sweep  walks the tolerances too, and waits for them
 */
export async function proposeValues(services: Services, check: PreparedCheck, { prepared, now, gains, sweep, asker }: { prepared: PreparedJoint; now: Side & { kind: 'model' }; gains: readonly ProposedGain[]; sweep: boolean; asker: number }): Promise<Proposal> {
  const { candidate } = check.inputs
  const edits: Edit[] = []
  const rules: Proposal['rules'] = []
  for (const { gain, value, rule, source } of gains) {
    const place = placeOfLetter(candidate, prepared, now, gain as MapParameter)
    const parameter = now.schema.byRole.get(roleOfLetter[gain as MapParameter]!)
    if (!place || !parameter) continue
    const given = typed(parameter, value * place.perSi)
    rules.push({ gain, value: given.value / place.perSi, unit: unitOfLetter[gain as MapParameter], rule: given.held ? `${rule}; held at what the firmware takes` : rule, source })
    const from = valueAt(candidate, place.pointer)
    if (from !== given.value) edits.push({ pointer: place.pointer, ...(from === undefined ? {} : { from }), to: given.value })
  }
  const after = prepareCheck({ ...check.inputs, candidate: applyEdits(candidate, edits) })
  const then = jointOf(after, prepared.joint)
  if (then.now.kind !== 'model') throw new DomainError('content-invalid', `The values found can't be encoded for ${prepared.joint}. Nothing was altered; choose other bandwidths.`)
  const asked = [then.now.asked.nominal, ...(sweep && then.now.asked.tolerance ? [then.now.asked.tolerance] : [])]
  const known = await services.checks.settle(asked, { asker, urgent: true, here: hereIfQuick() }).catch(worded)
  const judged = figuresOf(then.now, known)
  if (judged.kind !== 'figures') throw new DomainError('content-invalid', `${judged.kind === 'refused' ? judged.text : 'Nothing was computed.'} Nothing was altered; choose other bandwidths.`)
  const figures: JointFigures = judged.figures
  const findings: Finding[] = fold(findingsOf(after, then, known))
  const reaches = after.joints.filter((j) => j.now.kind !== 'refused' && check.joints.some((b) => b.joint === j.joint && b.now.kind !== 'refused' && b.now.imageSha256 !== (j.now as { imageSha256?: string }).imageSha256)).map((j) => j.joint)
  return { joint: prepared.joint, reaches, rules, edits, figures, findings }
}
