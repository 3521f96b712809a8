import { orderOf, physicalRange, rawAtOrder } from './encoding.ts'
import type { Bound, Parameter, ParameterValue, ParameterValues } from './parameter-schema.ts'
import { shown, under } from './problem-list.ts'
import { compare, divide, exactly, multiply, roundHalfEven, type Rational } from './rational.ts'

export interface ValueProblem {
  /** JSON pointer into the set of values. */
  readonly pointer: string
  /** Name of the parameter; empty for a rule over several. */
  readonly parameter: string
  readonly code:
    | 'unknown-parameter' | 'no-register' | 'read-only' | 'missing' | 'wrong-type' | 'not-finite' | 'not-a-decimal'
    | 'not-whole' | 'out-of-range' | 'below-minimum' | 'above-maximum' | 'not-a-multiple' | 'not-a-member' | 'not-constant' | 'rule' | 'release'
  readonly message: string
}

export type ValueReading =
  | { readonly kind: 'value'; readonly exact: Rational | null; readonly raw: number | null }
  | { readonly kind: 'refused'; readonly code: ValueProblem['code']; readonly message: string }

const refused = (code: ValueProblem['code'], message: string): ValueReading => ({ kind: 'refused', code, message })

/** The parameter as messages name it. */
export const label = (parameter: Parameter): string =>
  parameter.title === parameter.name ? parameter.name : `${parameter.title} (${parameter.name})`

const withUnit = (text: string, parameter: Parameter): string => (parameter.unit ? `${text} ${parameter.unit}` : text)

/**
 * One value against its parameter: type, register range, bounds.
 *
 * Register range and bounds are judged on rounded raw values, so that a typed 0.2 meets a maximum of 0.2 in an f32.
 *
 * @returns the exact value and the raw value, or the first thing wrong with it, naming parameter, value and range
 * @source  register-image.md, Encoding rules
 */
export function readValue(parameter: Parameter, value: unknown): ValueReading {
  if (parameter.kind === 'boolean') {
    if (typeof value !== 'boolean') return refused('wrong-type', `${label(parameter)} must be true or false, not ${shown(value)}.`)
    return { kind: 'value', exact: null, raw: parameter.register?.values?.[String(value)] ?? null }
  }
  if (parameter.kind === 'enum') return readMember(parameter, value)
  return readNumber(parameter, value)
}

function readMember(parameter: Parameter, value: unknown): ValueReading {
  const choices = parameter.choices ?? []
  const member = choices.find((choice) => choice === value || (typeof choice === 'number' && typeof value === 'string' && sameDecimal(choice, value)))
  if (member === undefined) return refused('not-a-member', `${label(parameter)} cannot be ${shown(value)}. It is one of ${choices.join(', ')}.`)
  return { kind: 'value', exact: null, raw: parameter.register?.values?.[String(member)] ?? null }
}

function sameDecimal(a: number, b: string): boolean {
  const left = exactly(a)
  const right = exactly(b)
  return left !== null && right !== null && compare(left, right) === 0
}

function readNumber(parameter: Parameter, value: unknown): ValueReading {
  const codec = parameter.register?.codec ?? null
  if (typeof value === 'number' && !Number.isFinite(value)) return refused('not-finite', `${label(parameter)} cannot be ${value}.${rangeText(parameter)}`)
  if (typeof value !== 'number' && typeof value !== 'string') return refused('wrong-type', `${label(parameter)} must be a number, not ${shown(value)}.${rangeText(parameter)}`)
  const exact = exactly(value)
  if (!exact) {
    return /^[+-]?\d/.test(String(value))
      ? refused('not-a-decimal', `${label(parameter)}: ${shown(value)} is no decimal of at most 400 characters and powers of ten.${rangeText(parameter)}`)
      : refused('wrong-type', `${label(parameter)} must be a number, not ${shown(value)}.${rangeText(parameter)}`)
  }
  if (parameter.kind === 'integer' && exact.n % exact.d !== 0n) return refused('not-whole', `${label(parameter)} must be a whole number, not ${value}.`)
  const order = codec ? orderOf(codec, exact) : null
  const raw = codec && order !== null ? rawAtOrder(codec, order) : null
  if (raw?.kind === 'out-of-range') {
    return refused('out-of-range', `${label(parameter)} cannot hold ${withUnit(String(value), parameter)}.${rangeText(parameter)}`)
  }
  const outside = outsideBounds(parameter, exact, order, value)
  if (outside) return outside
  return { kind: 'value', exact, raw: raw ? raw.raw : null }
}

/** Sentence with the range that a register can hold. */
export function rangeText(parameter: Parameter): string {
  const register = parameter.register
  if (!register || register.values) return ''
  const { low, high } = physicalRange(register.codec)
  return ` Its register (${register.encoding.name}) holds ${low} to ${withUnit(String(high), parameter)}.`
}

/** Sign of value − bound, on rounded raw values where there is a register. */
function against(exact: Rational, order: bigint | null, bound: Bound): number {
  if (order === null || bound.order === null) return compare(exact, bound.exact)
  return order < bound.order ? -1 : order > bound.order ? 1 : 0
}

function outsideBounds(parameter: Parameter, exact: Rational, order: bigint | null, value: number | string): ValueReading | null {
  const { minimum, maximum, exclusiveMinimum, exclusiveMaximum, multipleOf } = parameter.bounds
  const low = minimum && against(exact, order, minimum) < 0
  const high = maximum && against(exact, order, maximum) > 0
  const tooLow = exclusiveMinimum && against(exact, order, exclusiveMinimum) <= 0
  const tooHigh = exclusiveMaximum && against(exact, order, exclusiveMaximum) >= 0
  const between = multipleOf && !isMultiple(parameter, exact, multipleOf)
  if (!low && !high && !tooLow && !tooHigh && !between) return null
  const given = `${label(parameter)}: ${withUnit(String(value), parameter)}`
  if (low) return refused('below-minimum', `${given} is below the minimum ${minimum.text}.${rangeText(parameter)}`)
  if (high) return refused('above-maximum', `${given} is above the maximum ${maximum.text}.${rangeText(parameter)}`)
  if (tooLow) return refused('below-minimum', `${given} must be above ${exclusiveMinimum.text}.`)
  if (tooHigh) return refused('above-maximum', `${given} must be below ${exclusiveMaximum.text}.`)
  return refused('not-a-multiple', `${given} is no multiple of ${multipleOf?.text}.`)
}

/** A multiple, or what the register holds in place of one. */
function isMultiple(parameter: Parameter, exact: Rational, step: Bound): boolean {
  const nearest = multiply({ n: roundHalfEven(divide(exact, step.exact)), d: 1n }, step.exact)
  if (compare(nearest, exact) === 0) return true
  const codec = parameter.register?.codec
  if (!codec || codec.encoding.kind === 'integer') return false
  return orderOf(codec, nearest) === orderOf(codec, exact)
}

/** The value that counts for a parameter: the one given, else the default; undefined when there is neither. */
export const effectiveValue = (parameter: Parameter, values: ParameterValues): ParameterValue | undefined =>
  Object.hasOwn(values, parameter.name) ? values[parameter.name] : (parameter.default ?? undefined)

/** What is wrong with one value, `const` counted in; null when nothing is. */
export function problemOfValue(parameter: Parameter, value: unknown): ValueProblem | null {
  const reading = readValue(parameter, value)
  if (reading.kind === 'refused') return valueProblem(parameter.name, reading.code, reading.message)
  if (parameter.constant !== null && !equalValues(parameter, parameter.constant, value as ParameterValue)) {
    return valueProblem(parameter.name, 'not-constant', `${label(parameter)} must be ${shown(parameter.constant)}, not ${shown(value)}.`)
  }
  return null
}

/** Equal as the board would see them: by raw value where there is a register, else exactly. */
export function equalValues(parameter: Parameter, a: ParameterValue, b: ParameterValue): boolean {
  const left = readValue(parameter, a)
  const right = readValue(parameter, b)
  if (left.kind !== 'value' || right.kind !== 'value') return false
  if (left.raw !== null && right.raw !== null) return left.raw === right.raw
  return left.exact && right.exact ? compare(left.exact, right.exact) === 0 : a === b
}

export const valueProblem = (name: string, code: ValueProblem['code'], message: string): ValueProblem =>
  ({ pointer: under('', name), parameter: name, code, message })
