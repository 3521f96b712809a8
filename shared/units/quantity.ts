import { add, divide, exactly, keepDecimal, multiply, parseDecimal, subtract, toDecimalText, toDouble, type Rational } from '../registers/rational.ts'
import { dimensionText, NO_DIMENSION, sameDimension } from './dimension.ts'
import { parseUnit, type Unit } from './unit.ts'

export type QuantityReading =
  | {
      readonly kind: 'value'
      /** In the parameter's unit; a decimal text where a double does not hold it. */
      readonly value: number | string
      /** True when the change of unit has no finite decimal, so that the nearest double stands for it (deg to rad). */
      readonly rounded: boolean
    }
  | { readonly kind: 'refused'; readonly message: string }

/** π to 50 places: its error is far below a double's. Source: OEIS A000796 (from memory). */
const PI: Rational = { n: 314159265358979323846264338327950288419716939937511n, d: 10n ** 50n }
const PLAIN: Unit = { text: '', dimension: NO_DIMENSION, factor: { n: 1n, d: 1n }, pi: 0, zero: null }
/** Digits may be grouped: by any space in threes before the point, by narrow ones after it (`5 1/s` is five per second). */
const TYPED = /^([+\-−–]?(?:\d+(?:[\s\u00a0\u2009\u202f]\d{3}(?!\d))*(?:\.\d+(?:[\u00a0\u2009\u202f]\d+)*)?|\.\d+)(?:[eE][+\-−]?\d+)?)\s*(.*)$/u

/**
 * A typed value with or without a unit, such as `350 mA`, `12 deg`, `60 rpm`, `0.35`, in the parameter's unit.
 *
 * Without a unit the number is in the parameter's own. A change of unit is exact where it has a finite decimal.
 */
export function readQuantity(text: string, unit: string | null): QuantityReading {
  if (/^\s*[+\-−]?\d*,\d/.test(text)) return { kind: 'refused', message: `“${text}” has a decimal comma; write a point.` }
  const match = TYPED.exec(text.trim())
  if (!match) return { kind: 'refused', message: `“${text}” does not begin with a number.` }
  const digits = match[1].replace(/[\s\u00a0\u2009\u202f]/g, '').replace(/[−–]/g, '-').replace(/^([+-]?)\./, '$10.').replace(/^\+/, '')
  const exact = parseDecimal(digits)
  if (!exact) return { kind: 'refused', message: `“${match[1]}” has more digits or a larger power of ten than a value may have.` }
  const named = match[2].trim()
  if (named === '' || named === unit) return { kind: 'value', value: keepDecimal(digits), rounded: false }
  return convert(exact, named, unit)
}

function convert(exact: Rational, named: string, unit: string | null): QuantityReading {
  const from = parseUnit(named)
  if (!from) return { kind: 'refused', message: `“${named}” is no unit that Detent knows.` }
  const to = unit === null ? PLAIN : parseUnit(unit)
  if (!to || !sameDimension(from.dimension, to.dimension)) {
    return { kind: 'refused', message: `${named} is ${dimensionText(from.dimension)}; this value is in ${unit ?? 'no unit'}${to && unit !== null ? ` (${dimensionText(to.dimension)})` : ''}.` }
  }
  const value = fromBase(toBase(exact, from), to)
  const pure = from.pi === to.pi
  const decimal = pure ? toDecimalText(value) : null
  return decimal === null ? { kind: 'value', value: toDouble(value), rounded: true } : { kind: 'value', value: keepDecimal(decimal), rounded: false }
}

/** A value from one unit to another of the same dimension; exact where it has a finite decimal. */
export function convertValue(value: number | string, from: string | null, to: string | null): QuantityReading {
  const exact = exactly(value)
  if (!exact) return { kind: 'refused', message: `“${value}” is no number.` }
  if (from === to || from === null) return { kind: 'value', value, rounded: false }
  return convert(exact, from, to)
}

/** SI value of a number in a unit, π left out of it (both units of a change carry their own). */
function toBase(value: Rational, unit: Unit): { value: Rational; pi: number } {
  const scaled = multiply(value, unit.factor)
  return { value: unit.zero === null ? scaled : add(scaled, parseDecimal(unit.zero)!), pi: unit.pi }
}

function fromBase(base: { value: Rational; pi: number }, unit: Unit): Rational {
  const above = unit.zero === null ? base.value : subtract(base.value, parseDecimal(unit.zero)!)
  let value = divide(above, unit.factor)
  const pi = base.pi - unit.pi
  for (let k = 0; k < Math.abs(pi); k += 1) value = pi > 0 ? multiply(value, PI) : divide(value, PI)
  return value
}

/** Number in a unit to SI (rad, A, s, K …): the nearest double. NaN when either is none. */
export function toSi(value: number | string, unit: string | null): number {
  const exact = exactly(value)
  const read = unit === null ? PLAIN : parseUnit(unit)
  return exact && read ? toDouble(fromBase(toBase(exact, read), PLAIN)) : NaN
}

/** SI number to a unit: the nearest double. NaN when either is none. */
export function fromSi(value: number, unit: string | null): number {
  const exact = exactly(value)
  const read = unit === null ? PLAIN : parseUnit(unit)
  return exact && read ? toDouble(fromBase({ value: exact, pi: 0 }, read)) : NaN
}
