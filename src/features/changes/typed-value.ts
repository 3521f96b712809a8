import type { Value } from '../../../shared/parameters/machine-set.ts'
import type { Parameter } from '../../../shared/registers/parameter-schema.ts'
import { toDouble } from '../../../shared/registers/rational.ts'
import { roundingError, toPhysical } from '../../../shared/registers/encoding.ts'
import { problemOfValue, readValue } from '../../../shared/registers/value-check.ts'
import { formatExact, formatHex, formatNumber } from '../../lib/format.ts'
import { readTypedQuantity } from './display-unit.ts'

export type TypedValue = { kind: 'value'; value: Value } | { kind: 'refused'; message: string }

/**
 * What a person typed for a parameter, such as `350 mA`, `12 deg`, `60 rpm`, `5.6`, as a value of the set.
 *
 * @returns the value in the parameter's unit, or what is wrong with it in words: unit, type, register range, the schema's bounds
 */
export function readTyped(parameter: Parameter, text: string): TypedValue {
  const read = readKind(parameter, text.trim())
  if (read.kind === 'refused') return read
  const problem = problemOfValue(parameter, read.value)
  if (!problem) return read
  // The register's own range is worth saying where it is what refuses; beside the schema's bound it only lengthens the sentence.
  return { kind: 'refused', message: problem.code === 'out-of-range' ? problem.message : problem.message.replace(/ Its register \(.*$/, '') }
}

function readKind(parameter: Parameter, text: string): TypedValue {
  if (parameter.kind === 'boolean') {
    if (text === 'true' || text === 'on') return { kind: 'value', value: true }
    if (text === 'false' || text === 'off') return { kind: 'value', value: false }
    return { kind: 'refused', message: `${parameter.title} is on or off.` }
  }
  if (parameter.kind === 'enum') {
    const choice = parameter.choices?.find((c) => String(c) === text)
    return choice === undefined ? { kind: 'refused', message: `${parameter.title} is one of ${(parameter.choices ?? []).join(', ')}.` } : { kind: 'value', value: choice }
  }
  return readTypedQuantity(text, parameter.unit)
}

/** A value as it stands in a field: every digit of it. */
export const valueText = (value: Value | undefined): string => (value === undefined ? '' : typeof value === 'boolean' ? (value ? 'on' : 'off') : String(value))

/** A value as a cell shows it: grouped, a true minus; a switch in words. */
export const shownValue = (value: Value | undefined): string => (value === undefined ? '–' : typeof value === 'boolean' ? (value ? 'on' : 'off') : formatExact(plain(value)))

/** Without an exponent where a few digits say the same. */
function plain(value: number | string): string {
  const text = String(value)
  return typeof value === 'number' && /e/.test(text) && Math.abs(value) >= 1e-9 && Math.abs(value) < 1e21 ? value.toFixed(20).replace(/\.?0+$/, '') : text
}

/** The number a value is; null for a switch or a word. */
export const numberOf = (value: Value | undefined): number | null => {
  if (typeof value === 'number') return value
  if (typeof value !== 'string') return null
  const n = Number(value)
  return value.trim() !== '' && Number.isFinite(n) ? n : null
}

/** The schema's bounds as numbers; null on the side that has none. */
export function boundsOf(parameter: Parameter): { min: number | null; max: number | null } {
  const { minimum, maximum, exclusiveMinimum, exclusiveMaximum } = parameter.bounds
  const low = minimum ?? exclusiveMinimum
  const high = maximum ?? exclusiveMaximum
  return { min: low ? toDouble(low.exact) : null, max: high ? toDouble(high.exact) : null }
}

/** "0x24, q7.24", with the bits of a field; "" for a constant of the firmware. */
export function registerText(parameter: Parameter): string {
  const r = parameter.register
  if (!r) return ''
  const bits = r.bit === null ? '' : r.width === 1 || r.width === null ? `, bit ${r.bit}` : `, bits ${r.bit} to ${r.bit + r.width - 1}`
  return `${formatHex(r.address)}, ${r.encoding.name}${bits}`
}

/** What the register makes of a value: "held as 5.59999996"; "held exactly"; "" where no number is held. */
export function heldText(parameter: Parameter, value: Value | undefined): string {
  if (!parameter.register || value === undefined || typeof value === 'boolean') return ''
  const reading = readValue(parameter, value)
  if (reading.kind !== 'value' || reading.exact === null || reading.raw === null) return ''
  const { absolute, relative } = roundingError(parameter.register.codec, reading.exact, reading.raw)
  if (absolute === 0) return 'held exactly'
  const held = toPhysical(parameter.register.codec, reading.raw)
  const percent = relative === null ? '' : `, ${formatNumber(relative * 100, { digits: 2 })} % off`
  return `held as ${formatExact(plain(Number(held.toPrecision(9))))}${percent}`
}

/** "0 to 8", "at least 0", "forward or reverse". */
export function rangeText(parameter: Parameter): string {
  if (parameter.choices) return parameter.choices.map(String).join(' or ')
  if (parameter.kind === 'boolean') return 'on or off'
  const { min, max } = boundsOf(parameter)
  if (min !== null && max !== null) return `${formatExact(plain(min))} to ${formatExact(plain(max))}`
  return min !== null ? `at least ${formatExact(plain(min))}` : max !== null ? `at most ${formatExact(plain(max))}` : ''
}
