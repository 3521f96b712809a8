import { roundHalfEven, type Rational } from './rational.ts'

const view = new DataView(new ArrayBuffer(4))

/** Value of a binary32 bit pattern (IEEE 754), exact in a double. */
export function f32ToDouble(bits: number): number {
  view.setUint32(0, bits)
  return view.getFloat32(0)
}

/** Order-preserving integer of a bit pattern: larger value, larger key; both zeros are 0. */
export const f32Key = (bits: number): number => (bits >= 0x80000000 ? -(bits - 0x80000000) : bits)

/**
 * Bit pattern of the binary32 nearest to an exact rational, ties to even (roundTiesToEven), ±∞ beyond the range.
 *
 * One rounding from the exact value: going through a double would round twice and can miss a tie.
 *
 * @source IEEE 754-2019 §4.3.1
 */
export function roundToF32(value: Rational): number {
  if (value.n === 0n) return 0
  const sign = value.n < 0n ? 0x80000000 : 0
  const n = value.n < 0n ? -value.n : value.n
  const d = value.d
  const atLeast = (k: number): boolean => (k >= 0 ? n >= d << BigInt(k) : n << BigInt(-k) >= d)
  let e = (n.toString(16).length - d.toString(16).length) * 4
  if (e > 136) return sign + 0x7f800000
  if (e < -160) return sign
  while (!atLeast(e)) e -= 1
  while (atLeast(e + 1)) e += 1
  // the last place: 24 bits of significand, or the fixed 2^−149 of the subnormals
  const place = Math.max(e - 23, -149)
  const units = Number(roundHalfEven(place >= 0 ? { n, d: d << BigInt(place) } : { n: n << BigInt(-place), d }))
  if (units === 0) return sign
  // adding the significand to the biased exponent lets a carry run into the exponent, up to ∞
  const bits = (place + 149) * 0x800000 + units
  return sign + Math.min(bits, 0x7f800000)
}
