import { describe, expect, it } from 'vitest'
import { exactPhysical, numberCodec, parseEncoding, rawRange, toPhysical, toRaw, type NumberCodec } from '../../shared/registers/encoding.ts'
import { decimalOf, ONE, parseDecimal, ZERO } from '../../shared/registers/rational.ts'
import { rawToWord, readWord, wordBytes, wordToRaw } from '../../shared/registers/word-bytes.ts'

const fixed = (bits: number): string[] => [
  ...Array.from({ length: bits }, (_, f) => `q${bits - 1 - f}.${f}`),
  ...Array.from({ length: bits + 1 }, (_, f) => `uq${bits - f}.${f}`),
]
const NARROW = ['u8', 'i8', 'u16', 'i16', ...fixed(8), ...fixed(16)]

/** First raw value that does not come back, or null: one expectation a codec, not one a value. */
function firstLoss(codec: NumberCodec, expected: (raw: number) => number): number | null {
  const { bits, signed } = codec.encoding
  const { low, high } = rawRange(codec.encoding)
  for (let raw = low; raw <= high; raw += 1) {
    const physical = toPhysical(codec, raw)
    const back = toRaw(codec, decimalOf(physical)!)
    if (physical !== expected(raw) || back.kind !== 'raw' || back.raw !== raw) return raw
    for (const order of ['little', 'big'] as const) {
      const bytes = wordBytes(rawToWord(raw, bits), bits / 8, order)
      if (wordToRaw(readWord(bytes, 0, bits / 8, order), bits, signed) !== raw) return raw
    }
  }
  return null
}

describe('every 8- and 16-bit encoding, every raw value', () => {
  it('covers all of them', () => {
    expect(NARROW).toHaveLength(4 + 8 + 9 + 16 + 17)
  })

  it.each(NARROW)('%s: encode(decode(raw)) = raw, and the physical value is raw over a power of two', (name) => {
    const encoding = parseEncoding(name)!
    const codec = numberCodec(encoding, ONE, ZERO)
    expect(firstLoss(codec, (raw) => raw / 2 ** encoding.fraction)).toBeNull()
  })

  it.each([
    ['u16', '0.0054931640625', '0'],
    ['i16', '0.0001', '0'],
    ['u16', '-0.01', '655.35'],
    ['i8', '0.3', '-7.1'],
    ['u8', '1e-9', '1e-7'],
    ['u16', '123456789.123', '-1e9'],
  ])('%s with scale %s and offset %s: encode(decode(raw)) = raw', (name, scale, offset) => {
    const codec = numberCodec(parseEncoding(name)!, parseDecimal(scale)!, parseDecimal(offset)!)
    // the decimal raw·scale + offset, put together as text and read by the engine
    const nearest = (raw: number): number => {
      const exact = exactPhysical(codec, raw)!
      const places = exact.d.toString().length - 1
      return Number(`${exact.n}e${-places}`)
    }
    expect(firstLoss(codec, nearest)).toBeNull()
  })
})

it.each(['u4', 'u24', 'i64', 'f64', 'q7.23', 'q8.24', 'uq7.24', 'q-1.16', 'q07.24', 'Q7.24', 'q7', '', 'q16.0', 'uq0.0', 'q32.0'])('refuses %j as an encoding', (name) => {
  expect(parseEncoding(name)).toBeNull()
})
