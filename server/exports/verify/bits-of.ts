/** A word's bits as text, most significant first: `0000101` … Slow, plain, and unlike the encoder's arithmetic. */
export function bitsOf(bytes: Uint8Array, order: string): string {
  const eight = Array.from(bytes, (byte) => byte.toString(2).padStart(8, '0'))
  return (order === 'big' ? eight : eight.reverse()).join('')
}

/** Unsigned value of a bit text. */
export const unsigned = (bits: string): bigint => BigInt(`0b${bits}`)

/** Two's complement value of a bit text. */
export const signedValue = (bits: string): bigint => (bits[0] === '1' ? unsigned(bits) - (1n << BigInt(bits.length)) : unsigned(bits))

/** The bits of a field, by first bit (0 is the last character) and width. */
export const fieldBits = (bits: string, bit: number, width: number): string => bits.slice(bits.length - bit - width, bits.length - bit)

/** A bit text with a field's bits cleared. */
export const withoutField = (bits: string, bit: number, width: number): string =>
  bits.slice(0, bits.length - bit - width) + '0'.repeat(width) + bits.slice(bits.length - bit)
