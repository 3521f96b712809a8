import { signedValue, unsigned } from './bits-of.ts'
import { binary, distance, order, plainDecimal, plus, timesDecimal, whole, type PlainDecimal } from './plain-decimals.ts'

/** What a number register holds: its exact value, and the values its neighbours would have. */
export type NumberReading =
  | { readonly kind: 'number'; readonly value: PlainDecimal; readonly even: boolean; readonly neighbours: readonly PlainDecimal[] }
  | { readonly kind: 'no-number'; readonly what: string }

/** Reads the bits of a number register as its encoding's name says. */
export function readNumberForm(bits: string, encoding: string, scale: unknown, offset: unknown): NumberReading {
  if (encoding === 'f32') return readFloat(bits)
  const fixed = /^(u?)q(\d+)\.(\d+)$/.exec(encoding)
  const signed = fixed ? fixed[1] === '' : encoding.startsWith('i')
  const raw = signed ? signedValue(bits) : unsigned(bits)
  const at = linear(fixed ? Number(fixed[3]) : null, scale, offset)
  if (!at) return { kind: 'no-number', what: 'a scale or offset that is no decimal' }
  return { kind: 'number', value: at(raw), even: raw % 2n === 0n, neighbours: [at(raw - 1n), at(raw + 1n)] }
}

function linear(fraction: number | null, scale: unknown, offset: unknown): ((raw: bigint) => PlainDecimal) | null {
  if (fraction !== null) return (raw) => binary(raw, -fraction)
  const slope = plainDecimal(scale ?? 1)
  const shift = plainDecimal(offset ?? 0)
  return slope && shift ? (raw) => plus(timesDecimal(whole(raw), slope), shift) : null
}

/** IEEE 754 binary32 from its three parts. */
function readFloat(bits: string): NumberReading {
  const negative = bits[0] === '1'
  const size = unsigned(bits.slice(1))
  if (bits.slice(1, 9) === '11111111') return { kind: 'no-number', what: /^0+$/.test(bits.slice(9)) ? 'an infinity' : 'not a number' }
  if (negative && size === 0n) return { kind: 'no-number', what: 'a negative zero' }
  const sign = negative ? -1n : 1n
  const beside = size === 0n ? [floatOfSize(1n, 1n), floatOfSize(1n, -1n)] : [floatOfSize(size - 1n, sign), floatOfSize(size + 1n, sign)]
  return { kind: 'number', value: floatOfSize(size, sign), even: size % 2n === 0n, neighbours: beside }
}

/** Value of exponent and fraction bits taken as one integer; one past the largest is 2^128, where rounding to ∞ begins. */
function floatOfSize(size: bigint, sign: bigint): PlainDecimal {
  const exponent = Number(size >> 23n)
  const fraction = size & 0x7fffffn
  return exponent === 0 ? binary(sign * fraction, -149) : binary(sign * (fraction + 0x800000n), exponent - 150)
}

/**
 * True when no neighbouring raw value lies nearer to the wanted value, and a tie went to the even raw value.
 * This is the definition of correct rounding, checked without rounding.
 */
export function isNearest(reading: Extract<NumberReading, { kind: 'number' }>, wanted: PlainDecimal): boolean {
  const own = distance(reading.value, wanted)
  return reading.neighbours.every((beside) => {
    const sign = order(own, distance(beside, wanted))
    return sign < 0 || (sign === 0 && reading.even)
  })
}
