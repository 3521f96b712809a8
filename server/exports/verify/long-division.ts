/**
 * Checksums from their definitions: a CRC by dividing the message polynomial bit by bit, Fletcher by its double sum.
 * No table, nothing shared with the encoder's.
 *
 * @source parameters as the CRC catalogue of reveng.sourceforge.io lists them (CRC-32 values from memory, checked against its check value)
 */
const MODELS: Readonly<Record<string, { width: number; polynomial: bigint; start: bigint; mirrored: boolean; last: bigint }>> = {
  'CRC-32/ISO-HDLC': { width: 32, polynomial: 0x04c11db7n, start: 0xffffffffn, mirrored: true, last: 0xffffffffn },
  'CRC-16/IBM-3740': { width: 16, polynomial: 0x1021n, start: 0xffffn, mirrored: false, last: 0n },
  'CRC-8/SMBUS': { width: 8, polynomial: 0x07n, start: 0n, mirrored: false, last: 0n },
}

/** Checksum of bytes by name; null for a name that is not known. */
export function plainChecksum(name: string, bytes: readonly number[]): bigint | null {
  if (name === 'Fletcher-16') return fletcher(bytes)
  const model = MODELS[name]
  if (!model) return null
  const width = BigInt(model.width)
  const top = 1n << (width - 1n)
  const mask = (1n << width) - 1n
  let rest = model.start
  for (const byte of bytes) {
    for (let k = 0; k < 8; k += 1) {
      const bit = BigInt((byte >> (model.mirrored ? k : 7 - k)) & 1)
      const out = (rest & top ? 1n : 0n) ^ bit
      rest = (rest << 1n) & mask
      if (out === 1n) rest ^= model.polynomial
    }
  }
  return (model.mirrored ? mirror(rest, model.width) : rest) ^ model.last
}

const mirror = (value: bigint, width: number): bigint => BigInt(`0b${[...value.toString(2).padStart(width, '0')].reverse().join('')}`)

/** sum1 = Σ b_k, sum2 = Σ (n − k)·b_k, both modulo 255. */
function fletcher(bytes: readonly number[]): bigint {
  let one = 0
  let two = 0
  bytes.forEach((byte, k) => {
    one += byte
    two += ((bytes.length - k) % 255) * byte
  })
  return BigInt((two % 255) * 256 + (one % 255))
}
