import type { Parameter, ParameterSchema, ParameterValue, ParameterValues } from './parameter-schema.ts'
import { problemOfValue, valueProblem, type ValueProblem } from './value-check.ts'
import { convertValue } from '../units/quantity.ts'

export interface CarryStep {
  readonly kind: 'kept' | 'renamed' | 'converted' | 'added' | 'dropped'
  /** Name before; null for an added value. */
  readonly from: string | null
  /** Name now; null for a dropped value. */
  readonly to: string | null
  readonly before: ParameterValue | null
  readonly after: ParameterValue | null
  /** True when the change of unit has no finite decimal and the nearest double was taken. */
  readonly rounded: boolean
}

export interface CarriedSet {
  readonly values: ParameterValues
  readonly steps: readonly CarryStep[]
  /** Values that need a person: they have no place, or break the new version's schema. */
  readonly problems: readonly ValueProblem[]
}

export interface CarryOptions {
  readonly from: ParameterSchema
  readonly fromVersion: string
  readonly to: ParameterSchema
  /** False for the values of one family or joint alone: what the new version adds then keeps coming from its defaults. */
  readonly addDefaults: boolean
}

/**
 * A set of one firmware version as a set of the next, by the new version's `x-carry`: renames, changes of unit, added
 * defaults. Nothing is lost silently: every value has its step, and what cannot be carried is a problem.
 *
 * @throws RangeError when the new version has no rules from that version
 */
export function carryOver(values: ParameterValues, { from, fromVersion, to, addDefaults }: CarryOptions): CarriedSet {
  const rules = to.carry
  if (!rules || rules.from !== fromVersion) {
    throw new RangeError(`The new version does not say how to carry a set over from ${fromVersion}${rules ? `, only from ${rules.from}` : ''}.`)
  }
  const carried: Record<string, ParameterValue> = {}
  const steps: CarryStep[] = []
  const problems: ValueProblem[] = []
  for (const [name, value] of Object.entries(values)) {
    if (rules.dropped.includes(name)) {
      steps.push({ kind: 'dropped', from: name, to: null, before: value, after: null, rounded: false })
      continue
    }
    const now = Object.hasOwn(rules.renames, name) ? rules.renames[name] : name
    const place = to.byName.get(now)
    if (!place?.register || place.register.access === 'ro') {
      problems.push(valueProblem(name, 'unknown-parameter', `${name} has no place in the new version, and its x-carry does not drop it.`))
      continue
    }
    const step = carryValue(name, value, place, from.byName.get(name) ?? null, rules.units)
    if (typeof step === 'string') {
      problems.push(valueProblem(name, 'wrong-type', step))
      continue
    }
    steps.push(step)
    carried[now] = step.after!
    const wrong = problemOfValue(place, step.after)
    if (wrong) problems.push(wrong)
  }
  if (addDefaults) {
    for (const [name, value] of Object.entries(rules.defaults)) {
      if (Object.hasOwn(carried, name)) continue
      carried[name] = value
      steps.push({ kind: 'added', from: null, to: name, before: null, after: value, rounded: false })
    }
  }
  return { values: carried, steps, problems }
}

/** The step of one value; a sentence when it cannot be taken. */
function carryValue(name: string, value: ParameterValue, place: Parameter, before: Parameter | null, units: Readonly<Record<string, string>>): CarryStep | string {
  const renamed = place.name === name ? 'kept' : 'renamed'
  const unit = Object.hasOwn(units, place.name) ? units[place.name] : null
  if (unit === null) {
    if (before && before.unit !== place.unit) return `${name} was in ${before.unit ?? 'no unit'} and is now in ${place.unit ?? 'no unit'}; x-carry does not say so.`
    return { kind: renamed, from: name, to: place.name, before: value, after: value, rounded: false }
  }
  if (before && before.unit !== unit) return `x-carry takes ${name} for ${unit}; the version before has it in ${before.unit ?? 'no unit'}.`
  if (typeof value === 'boolean') return `${name} is no number that ${unit} could be changed for.`
  const changed = convertValue(value, unit, place.unit)
  if (changed.kind === 'refused') return changed.message
  return { kind: 'converted', from: name, to: place.name, before: value, after: changed.value, rounded: changed.rounded }
}
