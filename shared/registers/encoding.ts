import { add, divide, multiply, ONE, roundHalfEven, subtract, toDouble, ZERO, type Rational } from './rational.ts'
import { roundToF32, f32ToDouble, f32Key } from './f32.ts'

/** How a word's bits are read: unsigned or signed (two's complement) integer, fixed point, or IEEE 754 binary32. */
export interface Encoding {
  readonly name: string
  readonly kind: 'integer' | 'fixed' | 'float'
  readonly signed: boolean
  readonly bits: 8 | 16 | 32
  /** Fraction bits of a fixed-point encoding, else 0. */
  readonly fraction: number
}

const CACHE = new Map<string, Encoding | null>()

/** Reads `u8 i8 u16 i16 u32 i32 f32`, `qM.F` (1 + M + F = 8, 16 or 32) and `uqM.F` (M + F = 8, 16 or 32); null for anything else. */
export function parseEncoding(name: string): Encoding | null {
  const known = CACHE.get(name)
  if (known !== undefined) return known
  const made = makeEncoding(name)
  // only names that exist are kept: their number is bounded, an attacker's inventions are not
  if (made) CACHE.set(name, made)
  return made
}

function makeEncoding(name: string): Encoding | null {
  if (name === 'f32') return { name, kind: 'float', signed: true, bits: 32, fraction: 0 }
  const integer = /^([ui])(8|16|32)$/.exec(name)
  if (integer) return { name, kind: 'integer', signed: integer[1] === 'i', bits: Number(integer[2]) as 8 | 16 | 32, fraction: 0 }
  const fixed = /^(u?)q(0|[1-9]\d?)\.(0|[1-9]\d?)$/.exec(name)
  if (!fixed) return null
  const signed = fixed[1] === ''
  const bits = (signed ? 1 : 0) + Number(fixed[2]) + Number(fixed[3])
  if (bits !== 8 && bits !== 16 && bits !== 32) return null
  return { name, kind: 'fixed', signed, bits, fraction: Number(fixed[3]) }
}

/** Lowest and highest raw value of an integer or fixed-point encoding. */
export const rawRange = (encoding: Encoding): { low: number; high: number } =>
  encoding.signed
    ? { low: -(2 ** (encoding.bits - 1)), high: 2 ** (encoding.bits - 1) - 1 }
    : { low: 0, high: 2 ** encoding.bits - 1 }

/** A number's way to the register and back. For f32 step and offset are 1 and 0. */
export interface NumberCodec {
  readonly encoding: Encoding
  /** Physical size of one raw step; negative when the scale is. */
  readonly step: Rational
  readonly offset: Rational
}

const PLAIN_CODECS = new Map<Encoding, NumberCodec>()

/** Codec of an encoding with the scale and offset of its register (1 and 0 unless it is an integer). */
export function numberCodec(encoding: Encoding, scale: Rational, offset: Rational): NumberCodec {
  if (scale !== ONE || offset !== ZERO) return { encoding, step: scale, offset }
  let codec = PLAIN_CODECS.get(encoding)
  if (!codec) {
    codec = { encoding, step: encoding.kind === 'fixed' ? { n: 1n, d: 1n << BigInt(encoding.fraction) } : ONE, offset: ZERO }
    PLAIN_CODECS.set(encoding, codec)
  }
  return codec
}

export type RawResult = { kind: 'raw'; raw: number } | { kind: 'out-of-range' }

/**
 * Place of a physical value among the raw values, rounded as a register rounds it (nearest, ties to the even raw
 * value) but without regard to its range: a larger value never has a smaller order, whatever the sign of the scale.
 */
export function orderOf(codec: NumberCodec, value: Rational): bigint {
  if (codec.encoding.kind === 'float') return BigInt(f32Key(roundToF32(value)))
  if (codec.offset === ZERO) return orderOfPlain(codec, value)
  return signedOrder(codec, roundHalfEven(divide(subtract(value, codec.offset), codec.step)))
}

const signedOrder = (codec: NumberCodec, raw: bigint): bigint => (codec.step.n < 0n ? -raw : raw)

/** Orders already worked out: a map has the same few bounds and defaults in the same few encodings ten thousand times. */
const ORDERS = new WeakMap<NumberCodec, WeakMap<Rational, bigint>>()

function orderOfPlain(codec: NumberCodec, value: Rational): bigint {
  let known = ORDERS.get(codec)
  if (!known) ORDERS.set(codec, (known = new WeakMap()))
  let order = known.get(value)
  if (order === undefined) known.set(value, (order = signedOrder(codec, roundHalfEven(divide(value, codec.step)))))
  return order
}

/** Largest order of a finite f32. */
const F32_LAST = 0x7f7fffff

/** The raw value at an order; out of range where the register ends. */
export function rawAtOrder(codec: NumberCodec, order: bigint): RawResult {
  if (codec.encoding.kind === 'float') {
    const key = Number(order)
    if (Math.abs(key) > F32_LAST) return { kind: 'out-of-range' }
    return { kind: 'raw', raw: key < 0 ? 0x80000000 - key : key }
  }
  const raw = codec.step.n < 0n ? -Number(order) : Number(order)
  const { low, high } = rawRange(codec.encoding)
  return raw < low || raw > high ? { kind: 'out-of-range' } : { kind: 'raw', raw: raw === 0 ? 0 : raw }
}

/**
 * Physical value to raw value: nearest, ties to the even raw value; the range is judged on the rounded one.
 * Zero is written +0.
 *
 * @returns the raw value as its encoding reads it (signed for i and q; the bit pattern for f32), or out of range
 * @source  register-image.md, Encoding rules
 */
export const toRaw = (codec: NumberCodec, value: Rational): RawResult => rawAtOrder(codec, orderOf(codec, value))

/** Exact physical value of a raw value; null for an f32's NaN and ±∞. */
export function exactPhysical(codec: NumberCodec, raw: number): Rational | null {
  if (codec.encoding.kind === 'float') return rationalOfDouble(f32ToDouble(raw))
  return add(multiply({ n: BigInt(raw), d: 1n }, codec.step), codec.offset)
}

/** Raw to physical: the double nearest to the exact value (an f32's NaN and ±∞ come back as such). */
export function toPhysical(codec: NumberCodec, raw: number): number {
  if (codec.encoding.kind === 'float') return f32ToDouble(raw)
  if (codec.encoding.kind === 'fixed') return raw / 2 ** codec.encoding.fraction
  return toDouble(add(multiply({ n: BigInt(raw), d: 1n }, codec.step), codec.offset))
}

/** Lowest and highest physical value a register can hold, as doubles. */
export function physicalRange(codec: NumberCodec): { low: number; high: number } {
  if (codec.encoding.kind === 'float') return { low: f32ToDouble(0xff7fffff), high: f32ToDouble(0x7f7fffff) }
  const { low, high } = rawRange(codec.encoding)
  const ends = [toPhysical(codec, low), toPhysical(codec, high)]
  return { low: Math.min(...ends), high: Math.max(...ends) }
}

/** Exact value of a finite double, bit for bit (not of the decimal it is written as). */
function rationalOfDouble(value: number): Rational | null {
  if (!Number.isFinite(value)) return null
  let d = 1n
  let n = value
  for (let k = 0; k < 1100 && !Number.isInteger(n); k += 1) { n *= 2; d *= 2n }
  return { n: BigInt(n), d }
}

/**
 * Rounding error of a value in its register.
 *
 * @returns absolute error in the value's unit, and relative to the typed value (null when that is 0 and the error is not)
 */
export function roundingError(codec: NumberCodec, value: Rational, raw: number): { absolute: number; relative: number | null } {
  const held = exactPhysical(codec, raw)
  if (!held) return { absolute: Infinity, relative: null }
  const error = subtract(held, value)
  if (error.n === 0n) return { absolute: 0, relative: 0 }
  const size = { n: error.n < 0n ? -error.n : error.n, d: error.d }
  const base = value.n < 0n ? { n: -value.n, d: value.d } : value
  return { absolute: toDouble(size), relative: base.n === 0n ? null : toDouble(divide(size, base)) }
}

/** True when every raw value survives the way to a double and back: one raw step is clearly wider than the doubles' spacing at the largest physical value. */
export function survivesDoubles(codec: NumberCodec): boolean {
  if (codec.encoding.kind !== 'integer') return true
  const step = Math.abs(toDouble(codec.step))
  const { low, high } = physicalRange(codec)
  const largest = Math.max(Math.abs(low), Math.abs(high))
  return Number.isFinite(largest) && step > 1e-290 && step > largest * 2 ** -50
}
