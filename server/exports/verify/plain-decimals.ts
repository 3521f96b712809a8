/**
 * Decimals as scaled integers: value = digits · 10^−places. Sums, products and comparisons only, never a quotient:
 * the second decoder judges by distances and has no rounding of its own that could agree with the encoder's.
 */
export interface PlainDecimal {
  readonly digits: bigint
  readonly places: number
}

export const whole = (value: bigint | number): PlainDecimal => ({ digits: BigInt(value), places: 0 })

/** Reads a JSON number or its text; null for anything else. */
export function plainDecimal(value: unknown): PlainDecimal | null {
  if (typeof value === 'number' && !Number.isFinite(value)) return null
  if (typeof value !== 'number' && typeof value !== 'string') return null
  const text = String(value)
  if (text.length > 500) return null
  const [mantissa, power = '0', ...rest] = text.toLowerCase().split('e')
  const [before, after = '', ...more] = mantissa.split('.')
  if (rest.length + more.length > 0 || !/^[+-]?\d+$/.test(before) || !/^\d*$/.test(after) || !/^[+-]?\d{1,4}$/.test(power)) return null
  const places = after.length - Number(power)
  const digits = BigInt(before.replace('+', '') + after)
  return places >= 0 ? { digits, places } : { digits: digits * 10n ** BigInt(-places), places: 0 }
}

const lifted = (a: PlainDecimal, places: number): bigint => (a.places === places ? a.digits : a.digits * 10n ** BigInt(places - a.places))

export function plus(a: PlainDecimal, b: PlainDecimal): PlainDecimal {
  const places = Math.max(a.places, b.places)
  return { digits: lifted(a, places) + lifted(b, places), places }
}

export const minus = (a: PlainDecimal, b: PlainDecimal): PlainDecimal => plus(a, { digits: -b.digits, places: b.places })
export const timesDecimal = (a: PlainDecimal, b: PlainDecimal): PlainDecimal => ({ digits: a.digits * b.digits, places: a.places + b.places })
export const distance = (a: PlainDecimal, b: PlainDecimal): PlainDecimal => {
  const d = minus(a, b)
  return d.digits < 0n ? { digits: -d.digits, places: d.places } : d
}

/** Sign of a − b. */
export function order(a: PlainDecimal, b: PlainDecimal): -1 | 0 | 1 {
  const { digits } = minus(a, b)
  return digits < 0n ? -1 : digits > 0n ? 1 : 0
}

/** m · 2^e as a decimal: 2^−k is 5^k · 10^−k. */
export const binary = (m: bigint, e: number): PlainDecimal =>
  e >= 0 ? { digits: m << BigInt(e), places: 0 } : { digits: m * 5n ** BigInt(-e), places: -e }

export function decimalText(a: PlainDecimal): string {
  const sign = a.digits < 0n ? '-' : ''
  const digits = String(a.digits < 0n ? -a.digits : a.digits).padStart(a.places + 1, '0')
  const split = digits.length - a.places
  return (sign + digits.slice(0, split) + (a.places > 0 ? `.${digits.slice(split)}` : '')).replace(/(\.\d*?)0+$/, '$1').replace(/\.$/, '')
}
