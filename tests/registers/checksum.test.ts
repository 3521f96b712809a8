import fc from 'fast-check'
import { expect, it } from 'vitest'
import { plainChecksum } from '../../server/exports/verify/long-division.ts'
import { checksumOf, type ChecksumAlgorithm } from '../../shared/registers/checksum.ts'

const CHECK = new TextEncoder().encode('123456789')

// CRC check values: reveng.sourceforge.io CRC catalogue (16.htm read; CRC-32 and CRC-8 by docs.rs wire-codec and crc-catalog);
// Fletcher-16: modulo 255, sum2·256 + sum1, value as register-image.md states it
const CATALOGUE: [ChecksumAlgorithm, number][] = [
  ['CRC-32/ISO-HDLC', 0xcbf43926],
  ['CRC-16/IBM-3740', 0x29b1],
  ['CRC-8/SMBUS', 0xf4],
  ['Fletcher-16', 0x1ede],
]

it.each(CATALOGUE)('%s meets its check value, in both routes', (name, value) => {
  expect(checksumOf(name, CHECK)).toBe(value)
  expect(plainChecksum(name, [...CHECK])).toBe(BigInt(value))
})

it.each(CATALOGUE)('%s: table and long division agree on seeded bytes', (name) => {
  fc.assert(
    fc.property(fc.uint8Array({ maxLength: 600 }), (bytes) => BigInt(checksumOf(name, bytes)) === plainChecksum(name, [...bytes])),
    { seed: 20261103, numRuns: 100 },
  )
})

it('knows no other name', () => {
  expect(plainChecksum('CRC-16/ARC', [1])).toBeNull()
})
