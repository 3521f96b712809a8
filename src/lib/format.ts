/**
 * Numbers, units and times as the screens write them: true minus, digits grouped by a space,
 * never an exponent where a prefix serves. Pure; no locale but British English, so that a figure reads
 * the same on every desk.
 */

const MINUS = '\u2212'
/** A no-break space: the shipped subsets hold no thinner one, and a fallback glyph would break the columns. */
const SPACE = '\u00a0'

export type ParsedNumber = { kind: 'number'; value: number; text: string } | { kind: 'error'; message: string }

/** Reads a typed number; keeps the text with its minus made plain. A comma, a unit or a second point is an error in words, never a guess. */
export function parseNumber(typed: string): ParsedNumber {
  const text = typed.trim().replaceAll(MINUS, '-').replaceAll(/[\u0020\u2009\u202f\u00a0](?=\d{3})/g, '')
  if (text === '') return { kind: 'error', message: 'Nothing is written here; a number is needed.' }
  if (text.includes(',')) return { kind: 'error', message: `"${typed}" has a comma; write a point before the decimals.` }
  if (!/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(text)) return { kind: 'error', message: `"${typed}" is not a number. The unit stands already beside the box.` }
  const value = Number(text)
  if (!Number.isFinite(value)) return { kind: 'error', message: `"${typed}" is too large for a number.` }
  return { kind: 'number', value, text: text.replace(/^\+/, '') }
}

/** Adds a step to a typed number and keeps as many decimals as either has; null when the text is no number. */
export function stepNumberText(text: string, step: number): string | null {
  const parsed = parseNumber(text)
  if (parsed.kind === 'error') return null
  const decimals = Math.max(decimalsOf(parsed.text), decimalsOf(String(step)))
  return (parsed.value + step).toFixed(Math.min(decimals, 20))
}

/** Decimals a written number has: 1 for "0.5", 6 for "1e-6". */
export function decimalsOf(text: string): number {
  const [mantissa, exponent = '0'] = text.toLowerCase().split('e')
  return Math.max(0, (mantissa.split('.')[1] ?? '').length - Number(exponent))
}

/** Groups the integer digits by three from five digits or, as on a scale, from four. */
function group(digits: string): string {
  const [whole, fraction] = digits.split('.')
  const grouped = whole.length > 3 ? whole.replaceAll(/\B(?=(\d{3})+$)/g, SPACE) : whole
  return fraction === undefined ? grouped : `${grouped}.${fraction}`
}

export interface NumberStyle {
  /** Significant digits, 1 to 17; 3 unless said. */
  digits?: number
  /** A plus before positive numbers. */
  plus?: boolean
}

/** The number to so many significant digits, plainly: 0.0123, 3 400, −12.5. Trailing zeros are kept, they are digits known. */
export function formatNumber(value: number, { digits = 3, plus = false }: NumberStyle = {}): string {
  if (Number.isNaN(value)) return 'no number'
  const sign = value < 0 ? MINUS : plus && value > 0 ? '+' : ''
  const size = Math.abs(value)
  if (size === Infinity) return `${sign}infinite`
  if (size === 0) return '0'
  return sign + group(plain(size, digits))
}

/** toPrecision without the exponent. */
function plain(size: number, digits: number): string {
  const [mantissa, exponent] = size.toExponential(digits - 1).split('e')
  const shift = Number(exponent)
  return shift >= digits ? mantissa.replace('.', '').padEnd(shift + 1, '0') : size.toFixed(Math.min(100, digits - 1 - shift))
}

/** The number to so many decimals, for columns that align. */
export function formatFixed(value: number, decimals: number, { plus = false }: Pick<NumberStyle, 'plus'> = {}): string {
  if (!Number.isFinite(value)) return formatNumber(value, { plus })
  const text = Math.abs(value).toFixed(decimals)
  const zero = Number(text) === 0
  return (zero ? '' : value < 0 ? MINUS : plus ? '+' : '') + group(text)
}

/** A typed or register-exact decimal, digits untouched: only minus and grouping are set. */
export function formatExact(text: string): string {
  return /^[+-]?\d+(\.\d+)?$/.test(text) ? (text.startsWith('-') ? MINUS : '') + group(text.replace(/^[+-]/, '')) : text
}

const PREFIXES: readonly [power: number, prefix: string][] = [[9, 'G'], [6, 'M'], [3, 'k'], [0, ''], [-3, 'm'], [-6, 'µ'], [-9, 'n'], [-12, 'p']]
/** Units that take a prefix on their first letter. Others (°, %, dB, 1/s, rad/s, g·m², °C) are left alone. */
const PREFIXABLE = new Set(['Ω', 'H', 'V', 'A', 's', 'Hz', 'F', 'W', 'J', 'N·m', 'rad', 'B', 'bit/s', 'V/A', 'A/V', 'N·m/A', 'V·s', 'V·s/rad', 'N·m·s', 'N·m·s/rad'])

export interface Quantity {
  number: string
  unit: string
  /** Power of ten that no prefix takes: written ·10ⁿ between number and unit; 0 when none. */
  power: number
}

/** Engineering notation: a prefix where the unit takes one, else a power of ten that is a multiple of three, outside 0.001 … 99 999. */
export function formatQuantity(value: number, unit: string, style: NumberStyle = {}): Quantity {
  const size = Math.abs(value)
  if (!Number.isFinite(value) || size === 0) return { number: formatNumber(value, style), unit, power: 0 }
  const rounded = Number(size.toPrecision(style.digits ?? 3))
  const power = Math.floor(Math.log10(rounded) / 3 + 1e-12) * 3
  if (PREFIXABLE.has(unit)) {
    const [taken, prefix] = PREFIXES.find(([p]) => p <= power) ?? PREFIXES[PREFIXES.length - 1]
    const capped = Math.min(taken, 9)
    return { number: formatNumber(value / 10 ** capped, style), unit: prefix + unit, power: 0 }
  }
  if (rounded >= 0.001 && rounded < 1e5) return { number: formatNumber(value, style), unit, power: 0 }
  return { number: formatNumber(value / 10 ** power, style), unit, power }
}

/** The same as one line of text, for labels and what is read out: "420 µH", "1.20e-6 A·s/rad". */
export function quantityText(value: number, unit: string, style: NumberStyle = {}): string {
  const q = formatQuantity(value, unit, style)
  return [q.power === 0 ? q.number : `${q.number}e${q.power}`, q.unit].filter(Boolean).join(SPACE)
}

/** "+75.0" for 3.20 to 5.60; null when nothing changed or there is nothing to compare with (before is 0). */
export function percentChange(before: number, after: number): string | null {
  if (before === 0 || before === after || !Number.isFinite(before) || !Number.isFinite(after)) return null
  const percent = ((after - before) / Math.abs(before)) * 100
  const digits = Math.abs(percent) >= 99.95 ? 0 : 1
  const text = formatFixed(percent, digits, { plus: true })
  return Number(text.replace(MINUS, '-').replaceAll(SPACE, '')) === 0 ? (percent > 0 ? '+0.0' : `${MINUS}0.0`) : text
}

/** One decimal, as margins are read. */
export function formatDb(decibels: number): string {
  return formatFixed(decibels, 1)
}

/** One decimal, as margins are read. */
export function formatDegrees(degrees: number): string {
  return formatFixed(degrees, 1)
}

/** 0x33; four digits from 0x100. */
export function formatHex(address: number): string {
  return `0x${address.toString(16).toUpperCase().padStart(address > 0xff ? 4 : 2, '0')}`
}

/** Lower-case hex by fours; `bytes` cuts to the first so many. */
export function groupHash(hash: string, bytes?: number): string {
  const shown = bytes === undefined ? hash : hash.slice(0, bytes * 2)
  return shown.toLowerCase().match(/.{1,4}/g)?.join(' ') ?? ''
}

/** 412 kB, 1.2 MB: decimal prefixes; bytes below 1000. */
export function formatBytes(count: number): string {
  if (count < 1000) return `${count} B`
  const q = formatQuantity(count, 'B', { digits: count < 10_000 ? 2 : 3 })
  return `${q.number} ${q.unit}`
}

/** "1 joint", "6 joints"; an irregular plural is given. */
export function count(n: number, one: string, many = `${one}s`): string {
  return `${formatFixed(n, 0)} ${n === 1 ? one : many}`
}

export type TimeStyle = 'short' | 'long' | 'clock' | 'date'

const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec']

/**
 * A time in a zone (the reader's own unless given): short "28 Nov 09:14", long "28 Nov 2026 09:14:07",
 * clock "09:14:07", date "28 Nov 2026".
 *
 * @throws RangeError when the instant is no date
 */
export function formatTime(instant: string | number | Date, style: TimeStyle = 'short', timeZone?: string): string {
  const parts = new Intl.DateTimeFormat('en-GB', {
    timeZone, hourCycle: 'h23', year: 'numeric', month: 'numeric', day: '2-digit', hour: '2-digit', minute: '2-digit', second: '2-digit',
  }).formatToParts(new Date(instant))
  const part = (type: Intl.DateTimeFormatPartTypes) => parts.find((p) => p.type === type)?.value ?? ''
  const day = `${part('day')} ${MONTHS[Number(part('month')) - 1]}`
  const minute = `${part('hour')}:${part('minute')}`
  if (style === 'clock') return `${minute}:${part('second')}`
  if (style === 'date') return `${day} ${part('year')}`
  return style === 'long' ? `${day} ${part('year')} ${minute}:${part('second')}` : `${day} ${minute}`
}

/** "30 Nov 2026 14:41:07 UTC", for the hover of every time. */
export function formatUtc(instant: string | number | Date): string {
  return `${formatTime(instant, 'long', 'UTC')} UTC`
}

/** "4 s", "3 min", "2 h", "5 days": rounded down, one unit. */
export function formatDuration(seconds: number): string {
  if (seconds < 90) return `${Math.floor(seconds)} s`
  if (seconds < 90 * 60) return `${Math.floor(seconds / 60)} min`
  return seconds < 48 * 3600 ? `${Math.floor(seconds / 3600)} h` : `${Math.floor(seconds / 86_400)} days`
}
