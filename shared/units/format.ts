import { PREFIXES, UNITS } from './unit-table.ts'

/** Narrow no-break space: groups digits by three, and stands between a number and its unit (SI Brochure 5.4.4, from memory). */
const THIN = '\u202f'

/** Groups the digits of a decimal text by three on both sides of the point; up to five decimals stay together. */
export function groupDigits(text: string): string {
  const match = /^([+-]?)(\d+)(?:\.(\d+))?(.*)$/.exec(text)
  if (!match) return text
  const whole = match[2].replace(/\B(?=(\d{3})+$)/g, THIN)
  const fraction = match[3] === undefined ? '' : `.${match[3].length < 6 ? match[3] : match[3].replace(/(\d{3})(?=\d)/g, `$1${THIN}`)}`
  return (match[1] === '-' ? '−' : match[1]) + whole + fraction + match[4]
}

/** A value as it is kept, every digit of it, grouped. */
export const formatExact = (value: number | string): string => groupDigits(String(value))

/** Rounds to significant digits, without an exponent between 1e-6 and 1e15. */
export function formatDigits(value: number, digits = 3): string {
  if (!Number.isFinite(value)) return String(value)
  const size = Math.abs(value)
  if (value === 0) return '0'
  if (size < 1e-6 || size >= 1e15) return value.toExponential(digits - 1).replace('-', '−').replace('e+', 'e')
  const places = Math.max(0, digits - 1 - Math.floor(Math.log10(Number(size.toPrecision(digits)))))
  return groupDigits(Number(value.toPrecision(digits)).toFixed(places))
}

/** Prefix letters by power of ten, as they are written. */
const LETTERS: ReadonlyMap<number, string> = new Map([
  ...Object.entries(PREFIXES).filter(([letter]) => letter !== 'u' && letter !== 'μ').map(([letter, power]) => [power, letter] as const),
  [0, ''],
])

/**
 * Engineering notation: significant digits with the SI prefix whose number lies in [1, 1000).
 *
 * @param unit  an SI unit without a prefix; one that takes none, or a product, keeps the plain number
 */
export function formatEngineering(value: number, unit: string, digits = 3): { number: string; unit: string } {
  const named = Object.hasOwn(UNITS, unit) ? UNITS[unit] : undefined
  if (!named?.prefixed || value === 0 || !Number.isFinite(value)) return { number: formatDigits(value, digits), unit }
  const rounded = Number(value.toPrecision(digits))
  const power = Math.min(9, Math.max(-12, 3 * Math.floor(Math.log10(Math.abs(rounded)) / 3 + 1e-9)))
  return { number: formatDigits(power < 0 ? value * 10 ** -power : value / 10 ** power, digits), unit: (LETTERS.get(power) ?? '') + unit }
}
