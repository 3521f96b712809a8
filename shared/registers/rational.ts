/** Exact rational numbers for the value codec: typed decimals, scales and offsets are never passed through a double. */
export interface Rational {
  readonly n: bigint
  /** Always positive. */
  readonly d: bigint
}

export const ZERO: Rational = { n: 0n, d: 1n }
export const ONE: Rational = { n: 1n, d: 1n }

/** Longest decimal taken, and the largest power of ten: beyond them a text is refused, so that no input can ask for a number of a million digits. */
export const MAX_DECIMAL_LENGTH = 400
export const MAX_DECIMAL_EXPONENT = 400

const DECIMAL = /^([+-]?)(\d+)(?:\.(\d+))?(?:[eE]([+-]?\d+))?$/
const TENS: bigint[] = Array.from({ length: 64 }, (_, k) => 10n ** BigInt(k))

export const tenTo = (k: number): bigint => TENS[k] ?? 10n ** BigInt(k)

/**
 * Exact value of a decimal text such as `-0.35`, `12`, `1.5e-3`.
 *
 * @returns the rational, or null when the text is no decimal or lies beyond the limits above
 */
export function parseDecimal(text: string): Rational | null {
  if (text.length > MAX_DECIMAL_LENGTH) return null
  const parts = DECIMAL.exec(text)
  if (!parts) return null
  const exponent = parts[4] === undefined ? 0 : Number(parts[4])
  if (Math.abs(exponent) > MAX_DECIMAL_EXPONENT) return null
  const fraction = parts[3] ?? ''
  const digits = BigInt(parts[2] + fraction)
  const n = parts[1] === '-' ? -digits : digits
  const shift = exponent - fraction.length
  return shift >= 0 ? { n: n * tenTo(shift), d: 1n } : { n, d: tenTo(-shift) }
}

/**
 * Exact value of the decimal that a double is written as (its shortest round-trip form): 0.35 means 35/100.
 *
 * @returns null for NaN and ±∞
 */
export function decimalOf(value: number): Rational | null {
  const known = SEEN.get(value)
  if (known) return known
  if (!Number.isFinite(value)) return null
  const exact = Number.isSafeInteger(value) ? { n: BigInt(value), d: 1n } : parseDecimal(String(value))
  if (exact) {
    if (SEEN.size >= 4096) SEEN.clear()
    SEEN.set(value, exact)
  }
  return exact
}

/** The same few numbers are asked for again and again: bounds, scales, defaults. */
const SEEN = new Map<number, Rational>()

/** Exact value of a number or of a decimal text; null when it is neither. */
export const exactly = (value: number | string): Rational | null =>
  typeof value === 'number' ? decimalOf(value) : parseDecimal(value)

export const compare = (a: Rational, b: Rational): number => {
  const left = a.n * b.d
  const right = b.n * a.d
  return left < right ? -1 : left > right ? 1 : 0
}

export const add = (a: Rational, b: Rational): Rational =>
  a.d === b.d ? { n: a.n + b.n, d: a.d } : { n: a.n * b.d + b.n * a.d, d: a.d * b.d }

export const subtract = (a: Rational, b: Rational): Rational => add(a, { n: -b.n, d: b.d })

export const multiply = (a: Rational, b: Rational): Rational => ({ n: a.n * b.n, d: a.d * b.d })

/** a / b; b is not zero. */
export const divide = (a: Rational, b: Rational): Rational =>
  b.n < 0n ? { n: -a.n * b.d, d: a.d * -b.n } : { n: a.n * b.d, d: a.d * b.n }

export const magnitude = (a: Rational): Rational => (a.n < 0n ? { n: -a.n, d: a.d } : a)

/** Nearest integer, ties to the even one. */
export function roundHalfEven(a: Rational): bigint {
  if (a.d === 1n) return a.n
  let floor = a.n / a.d
  if (a.n < 0n && floor * a.d !== a.n) floor -= 1n
  const twice = 2n * (a.n - floor * a.d)
  if (twice < a.d) return floor
  if (twice > a.d) return floor + 1n
  return floor % 2n === 0n ? floor : floor + 1n
}

const bitLength = (n: bigint): number => n.toString(16).length * 4

/**
 * The double nearest to a rational, ties to even; ±∞ beyond the doubles.
 *
 * Scales the quotient to 53 bits (fewer for subnormals), rounds once, and scales back exactly.
 */
export function toDouble(a: Rational): number {
  if (a.n === 0n) return 0
  const sign = a.n < 0n ? -1 : 1
  const n = a.n < 0n ? -a.n : a.n
  if (n <= 9007199254740992n && a.d <= 9007199254740992n) return (sign * Number(n)) / Number(a.d)
  // exponent e of the quotient: 2^e ≤ n/d < 2^(e+1), found from the bit lengths and corrected by one comparison
  let e = bitLength(n) - bitLength(a.d)
  const atLeast = (k: number): boolean => (k >= 0 ? n >= a.d << BigInt(k) : n << BigInt(-k) >= a.d)
  while (!atLeast(e)) e -= 1
  while (atLeast(e + 1)) e += 1
  if (e > 1023) return sign * Infinity
  const shift = Math.max(e - 52, -1074)
  const mantissa = roundHalfEven(shift >= 0 ? { n, d: a.d << BigInt(shift) } : { n: n << BigInt(-shift), d: a.d })
  // two factors, so that neither underflows nor overflows on its way; both products are exact but an overflow to ∞, which is right
  const half = Math.trunc(shift / 2)
  return sign * Number(mantissa) * 2 ** half * 2 ** (shift - half)
}

/** True when the double that a decimal text reads as is written back as the same decimal (trailing zeros apart). */
export function heldByDouble(text: string): boolean {
  const exact = parseDecimal(text)
  const back = decimalOf(Number(text))
  return exact !== null && back !== null && compare(exact, back) === 0
}

/** A typed decimal as it is kept: a number where a double holds it, else the text itself. */
export const keepDecimal = (text: string): number | string => (heldByDouble(text) ? Number(text) : text)

/** Decimal text of a rational with a finite decimal expansion; null when it has none. */
export function toDecimalText(a: Rational): string | null {
  let d = a.d
  let places = 0
  let n = a.n < 0n ? -a.n : a.n
  while (d % 10n === 0n) { d /= 10n; places += 1 }
  while (d % 2n === 0n) { d /= 2n; n *= 5n; places += 1 }
  while (d % 5n === 0n) { d /= 5n; n *= 2n; places += 1 }
  if (d !== 1n && n % d !== 0n) return null
  n /= d
  const digits = n.toString().padStart(places + 1, '0')
  const whole = digits.slice(0, digits.length - places)
  const fraction = digits.slice(digits.length - places).replace(/0+$/, '')
  return (a.n < 0n && n !== 0n ? '-' : '') + whole + (fraction ? `.${fraction}` : '')
}
