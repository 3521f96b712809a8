export type ChecksumAlgorithm = 'CRC-32/ISO-HDLC' | 'CRC-16/IBM-3740' | 'CRC-8/SMBUS' | 'Fletcher-16'

export const CHECKSUM_BITS: Record<ChecksumAlgorithm, 8 | 16 | 32> = {
  'CRC-32/ISO-HDLC': 32,
  'CRC-16/IBM-3740': 16,
  'CRC-8/SMBUS': 8,
  'Fletcher-16': 16,
}

/** Table of a CRC that shifts left (not reflected), kept in the top bits of a 32-bit word. */
function leftTable(width: number, polynomial: number): Uint32Array {
  const top = (polynomial << (32 - width)) >>> 0
  return Uint32Array.from({ length: 256 }, (_, byte) => {
    let r = (byte << 24) >>> 0
    for (let k = 0; k < 8; k += 1) r = r & 0x80000000 ? ((r << 1) ^ top) >>> 0 : (r << 1) >>> 0
    return r
  })
}

/** Table of a CRC that shifts right (reflected). */
function rightTable(reversedPolynomial: number): Uint32Array {
  return Uint32Array.from({ length: 256 }, (_, byte) => {
    let r = byte
    for (let k = 0; k < 8; k += 1) r = r & 1 ? (r >>> 1) ^ reversedPolynomial : r >>> 1
    return r >>> 0
  })
}

const CRC8 = leftTable(8, 0x07)
const CRC16 = leftTable(16, 0x1021)
const CRC32 = rightTable(0xedb88320)

function crcLeft(table: Uint32Array, width: number, initial: number, bytes: Iterable<number>): number {
  let r = (initial << (32 - width)) >>> 0
  for (const byte of bytes) r = ((r << 8) ^ table[(r >>> 24) ^ byte]) >>> 0
  return r >>> (32 - width)
}

function crc32(bytes: Iterable<number>): number {
  let r = 0xffffffff
  for (const byte of bytes) r = (r >>> 8) ^ CRC32[(r ^ byte) & 0xff]
  return (r ^ 0xffffffff) >>> 0
}

function fletcher16(bytes: Iterable<number>): number {
  let low = 0
  let high = 0
  for (const byte of bytes) {
    low = (low + byte) % 255
    high = (high + low) % 255
  }
  return high * 256 + low
}

/**
 * Checksum of bytes by a catalogue name.
 *
 * @accuracy check values over "123456789": CBF43926, 29B1, F4, 1EDE (checksum.test.ts)
 * @source   reveng.sourceforge.io CRC catalogue names; Fletcher-16 modulo 255 as register-image.md states it
 */
export function checksumOf(algorithm: ChecksumAlgorithm, bytes: Iterable<number>): number {
  switch (algorithm) {
    case 'CRC-32/ISO-HDLC': return crc32(bytes)
    case 'CRC-16/IBM-3740': return crcLeft(CRC16, 16, 0xffff, bytes)
    case 'CRC-8/SMBUS': return crcLeft(CRC8, 8, 0, bytes)
    case 'Fletcher-16': return fletcher16(bytes)
  }
}
