import { describe, expect, it } from 'vitest'
import { decodeImage } from '../../shared/registers/decode-image.ts'
import { encodeImage, type EncodedImage } from '../../shared/registers/encode-image.ts'
import { findValueProblems } from '../../shared/registers/find-value-problems.ts'
import type { ParameterSchema, ParameterValues } from '../../shared/registers/parameter-schema.ts'
import { aSchema, firmware, oneNumber } from './a-schema.ts'

function encoded(schema: ParameterSchema, values: ParameterValues, release = 0): EncodedImage {
  const result = encodeImage(schema, values, { release })
  if (result.kind === 'refused') throw new Error(result.problems.map((p) => p.message).join('\n'))
  return result
}
const codes = (schema: ParameterSchema, values: Record<string, unknown>): string[] => findValueProblems(schema, values as ParameterValues).map((p) => p.code)
const rawOf = (schema: ParameterSchema, v: number | string): number => encoded(schema, { v }).rows[0].raw

describe('exact decimals', () => {
  it('takes 0.35 at a scale of 0.1 for 4, not for the double’s 3.4999…', () => {
    expect(Math.round(0.35 / 0.1 - 1e-9)).toBe(3)
    expect(rawOf(oneNumber({ encoding: 'u8', scale: 0.1 }), 0.35)).toBe(4)
  })

  it.each([[0.25, 2], [0.45, 4], [0.55, 6], [0.05, 0], [0.15, 2]])('rounds the tie %d to the even raw %d', (value, raw) => {
    expect(rawOf(oneNumber({ encoding: 'u8', scale: 0.1 }), value)).toBe(raw)
  })

  it('rounds ties to even with a negative scale and an offset', () => {
    const schema = oneNumber({ encoding: 'i8', scale: -0.5, offset: 10 })
    expect(rawOf(schema, 9.75)).toBe(0)
    expect(rawOf(schema, 9.25)).toBe(2)
    expect(rawOf(schema, 10.75)).toBe(-2)
    expect(encoded(schema, { v: 9.25 }).decoded.v).toBe(9)
  })

  it('keeps a decimal that no double holds as text, and encodes that text', () => {
    const schema = oneNumber({ encoding: 'f32' })
    const v = '1.00000005960464477539062500001'
    expect(encoded(schema, { v }).rows[0]).toMatchObject({ typed: v, physical: 1 + 2 ** -23 })
    expect(rawOf(schema, '1.000000059604644775390625')).toBe(0x3f800000)
  })

  it('meets a maximum of 0.2 with a typed 0.2 in an f32, and again when it is read back', () => {
    for (const bounds of [{ maximum: 0.2 }, { minimum: 0.2 }]) {
      const schema = oneNumber({ encoding: 'f32' }, bounds)
      const { image, decoded } = encoded(schema, { v: 0.2 })
      expect(decoded.v).toBe(Math.fround(0.2))
      expect(decodeImage(schema, image)).toMatchObject({ values: { v: Math.fround(0.2) }, findings: [] })
      expect(codes(schema, decoded)).toEqual([])
    }
  })

  it('judges the range on the rounded raw value', () => {
    const schema = oneNumber({ encoding: 'u8' })
    expect(rawOf(schema, 255.5 - 1e-9)).toBe(255)
    expect(codes(schema, { v: 255.5 })).toEqual(['out-of-range'])
    expect(rawOf(schema, -0.5)).toBe(0)
    expect(codes(schema, { v: -0.51 })).toEqual(['out-of-range'])
    expect(rawOf(oneNumber({ encoding: 'q0.7' }), 0.996)).toBe(127)
    expect(codes(oneNumber({ encoding: 'q0.7' }), { v: 1 })).toEqual(['out-of-range'])
  })

  it('shows the rounding error, absolute and relative', () => {
    const row = encoded(oneNumber({ encoding: 'u8', scale: 0.1 }), { v: 0.34 }).rows[0]
    expect(row).toMatchObject({ physical: 0.3, errorAbsolute: 0.04, raw: 3 })
    expect(row.errorRelative).toBeCloseTo(0.04 / 0.34, 15)
    expect(encoded(oneNumber({ encoding: 'u8', scale: 1, offset: 0.4 }), { v: 0 }).rows[0]).toMatchObject({ errorAbsolute: 0.4, errorRelative: null })
  })

  it('writes −0 as +0', () => {
    expect([...encoded(oneNumber({ encoding: 'f32' }), { v: -0 }).image.subarray(0, 4)]).toEqual([0, 0, 0, 0])
  })
})

describe('refusals', () => {
  const schema = firmware('hinge-2.1.0')

  it.each([
    [{ velocityGain: NaN }, 'not-finite'],
    [{ velocityGain: Infinity }, 'not-finite'],
    [{ velocityGain: true }, 'wrong-type'],
    [{ velocityGain: null }, 'wrong-type'],
    [{ velocityGain: 'fast' }, 'wrong-type'],
    [{ velocityGain: '1e999' }, 'not-a-decimal'],
    [{ velocityGain: 128 }, 'out-of-range'],
    [{ velocityGain: 8.01 }, 'above-maximum'],
    [{ velocityGain: -0.01 }, 'below-minimum'],
    [{ velocityWindow: 8.5 }, 'not-whole'],
    [{ velocityWindow: 0 }, 'below-minimum'],
    [{ controlMode: 'torque' }, 'not-a-member'],
    [{ supplyCompensated: 1 }, 'wrong-type'],
    [{ windingTemperature: 20 }, 'read-only'],
    [{ encoderResolution: 65536 }, 'no-register'],
    [{ velocityGian: 1 }, 'unknown-parameter'],
    [{ constructor: 1 }, 'unknown-parameter'],
    [{ controlMode: 'current', currentLimit: 3.2 }, 'rule'],
  ])('%j: %s', (values, code) => {
    expect(codes(schema, values)).toEqual([code])
    expect(encodeImage(schema, values as unknown as ParameterValues, { release: 0 }).kind).toBe('refused')
  })

  it('names the parameter, the value and the range that the register holds', () => {
    const [problem] = findValueProblems(schema, { velocityGain: 200 })
    expect(problem.pointer).toBe('/velocityGain')
    expect(problem.message).toBe('Velocity gain (velocityGain) cannot hold 200 A·s/rad. Its register (q7.24) holds -128 to 127.99999994039536 A·s/rad.')
  })

  it('refuses a parameter with neither value nor default', () => {
    expect(codes(aSchema({ v: { type: 'number', 'x-register': { address: 0, encoding: 'u8' } } }), {})).toEqual(['missing'])
  })

  it('takes a multiple, or what a register holds in place of one', () => {
    const stepped = (encoding: string): ParameterSchema => oneNumber({ encoding }, { multipleOf: 0.1 })
    expect(codes(stepped('f32'), { v: 0.3 })).toEqual([])
    expect(codes(stepped('f32'), { v: Math.fround(0.3) })).toEqual([])
    expect(codes(stepped('f32'), { v: 0.35 })).toEqual(['not-a-multiple'])
  })

  it('keeps strict bounds strict on raw values', () => {
    const schema8 = oneNumber({ encoding: 'u8', scale: 0.1 }, { exclusiveMinimum: 1, exclusiveMaximum: 2 })
    expect(codes(schema8, { v: 1.04 })).toEqual(['below-minimum'])
    expect(codes(schema8, { v: 1.06 })).toEqual([])
    expect(codes(schema8, { v: 1.96 })).toEqual(['above-maximum'])
  })

  it.each([-1, 1.5, 2 ** 32, NaN])('refuses the release number %d', (release) => {
    expect(encodeImage(schema, {}, { release })).toMatchObject({ kind: 'refused', problems: [{ code: 'release' }] })
  })
})

describe('placing', () => {
  it('lays bytes by byte order, fields over reserved bits, fill between', () => {
    const schema = aSchema(
      {
        big: { type: 'integer', default: 0x1234, 'x-register': { address: 16, encoding: 'u16', byteOrder: 'big' } },
        little: { type: 'integer', default: -2, 'x-register': { address: 18, encoding: 'i32' } },
        mode: { enum: ['a', 'b', 'c'], default: 'c', 'x-register': { address: 22, encoding: 'u16', bit: 3, width: 2, values: { a: 0, b: 1, c: 3 }, reserved: 0x8001 } },
        on: { type: 'boolean', default: true, 'x-register': { address: 22, encoding: 'u16', bit: 15 - 1 } },
      },
      { base: 16, length: 12, fill: 0xaa, layoutId: { value: 0xbeef, address: 24, encoding: 'u16' }, release: { address: 27, encoding: 'u8' } },
    )
    expect(Buffer.from(encoded(schema, {}, 9).image).toString('hex')).toBe('1234' + 'feffffff' + '19c0' + 'efbe' + 'aa' + '09')
  })

  it('leaves read-only and write-only registers as fill in the image, and write-only ones in the words', () => {
    const schema = firmware('hinge-2.1.0')
    const { image, words } = encoded(schema, {})
    expect([...image.subarray(0x60, 0x7e)].every((byte) => byte === 255)).toBe(true)
    expect(words.find((w) => w.address === 0x7c)).toMatchObject({ access: 'wo', word: 165 })
    expect(words.some((w) => w.address === 0x64)).toBe(false)
  })

  it('sums fill but not the checksum’s own bytes', () => {
    const parts = { v: { type: 'integer', default: 7, 'x-register': { address: 2, encoding: 'u8' } } }
    const image = { length: 4, fill: 1, checksum: { algorithm: 'Fletcher-16', address: 0, encoding: 'u16' } }
    // bytes 7, 1: sum1 = 8, sum2 = 7 + 8 = 15
    expect([...encoded(aSchema(parts, image), {}).image]).toEqual([8, 15, 7, 1])
  })
})

describe('reading an image', () => {
  const schema = aSchema({
    gain: { type: 'number', maximum: 2, 'x-register': { address: 0, encoding: 'f32' } },
    mode: { enum: [1, -1], 'x-register': { address: 4, encoding: 'u8', bit: 1, width: 2, values: { '1': 0, '-1': 2 }, reserved: 0x80 } },
  }, { length: 5 })
  const read = (hex: string): ReturnType<typeof decodeImage> => decodeImage(schema, Uint8Array.from(Buffer.from(hex, 'hex')))

  it.each([
    ['0000803f84', { gain: 1, mode: -1 }, []],
    ['0000c07f80', { mode: 1 }, ['not-a-number']],
    ['0000807f80', { mode: 1 }, ['not-a-number']],
    ['0000008080', { gain: 0, mode: 1 }, ['negative-zero']],
    ['0000404080', { gain: 3, mode: 1 }, ['outside-schema']],
    ['0000803f82', { gain: 1 }, ['unlisted-value']],
    ['0000803f00', { gain: 1, mode: 1 }, ['reserved-bits']],
  ])('%s', (hex, values, found) => {
    const decoded = read(hex)
    expect(decoded.values).toEqual(values)
    expect(decoded.findings.map((f) => f.code)).toEqual(found)
  })

  it('reports a wrong checksum and layout id, and the release it holds', () => {
    const hinge = firmware('hinge-2.1.0')
    const image = encoded(hinge, {}, 77).image.slice()
    expect(decodeImage(hinge, image)).toMatchObject({ release: 77, findings: [] })
    image[0] ^= 1
    expect(decodeImage(hinge, image).findings.map((f) => f.code)).toEqual(['layout-id', 'checksum'])
  })

  it('refuses an image of another length', () => {
    expect(() => decodeImage(schema, new Uint8Array(4))).toThrow(RangeError)
  })
})
