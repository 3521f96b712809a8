import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { numberCodec, parseEncoding, rawRange, toPhysical, toRaw } from '../../shared/registers/encoding.ts'
import { f32ToDouble, roundToF32 } from '../../shared/registers/f32.ts'
import { decimalOf, ONE, parseDecimal, ZERO, type Rational } from '../../shared/registers/rational.ts'

const seed = 20261102
const LINEAR = ['u32', 'i32', ...Array.from({ length: 32 }, (_, f) => `q${31 - f}.${f}`), ...Array.from({ length: 33 }, (_, f) => `uq${32 - f}.${f}`)]
const codecOf = (name: string, scale: Rational = ONE, offset: Rational = ZERO): ReturnType<typeof numberCodec> => numberCodec(parseEncoding(name)!, scale, offset)

/** Exact value of a double, from its bits (not of its decimal). */
function bitExact(x: number): Rational {
  const view = new DataView(new ArrayBuffer(8))
  view.setFloat64(0, x)
  const bits = view.getBigUint64(0)
  const exponent = Number((bits >> 52n) & 0x7ffn)
  const fraction = bits & 0xfffffffffffffn
  const m = exponent === 0 ? fraction : fraction + (1n << 52n)
  const e = Math.max(exponent, 1) - 1075
  const n = bits >> 63n ? -m : m
  return e >= 0 ? { n: n << BigInt(e), d: 1n } : { n, d: 1n << BigInt(-e) }
}

describe('32-bit encodings', () => {
  it.each(LINEAR)('%s: encode(decode(raw)) = raw at the ends and at seeded values', (name) => {
    const codec = codecOf(name)
    const { low, high } = rawRange(codec.encoding)
    const edges = [low, low + 1, -1, 0, 1, high - 1, high].filter((raw) => raw >= low && raw <= high)
    const comesBack = (raw: number): boolean => {
      const back = toRaw(codec, decimalOf(toPhysical(codec, raw))!)
      return back.kind === 'raw' && back.raw === raw
    }
    expect(edges.filter((raw) => !comesBack(raw))).toEqual([])
    fc.assert(fc.property(fc.integer({ min: low, max: high }), comesBack), { seed, numRuns: 300 })
  })

  it.each([['i32', '0.000001', '0'], ['u32', '-0.0000001', '400'], ['i32', '3e-12', '0.001'], ['u32', '1e9', '-1e15']])(
    '%s with scale %s and offset %s comes back too',
    (name, scale, offset) => {
      const codec = codecOf(name, parseDecimal(scale)!, parseDecimal(offset)!)
      const { low, high } = rawRange(codec.encoding)
      fc.assert(fc.property(fc.integer({ min: low, max: high }), (raw) => {
        const back = toRaw(codec, decimalOf(toPhysical(codec, raw))!)
        return back.kind === 'raw' && back.raw === raw
      }), { seed, numRuns: 2000 })
    },
  )

  it('rounds to the nearest raw value: no neighbour lies nearer', () => {
    const codec = codecOf('q7.24')
    fc.assert(fc.property(fc.double({ min: -128, max: 127.9, noNaN: true }), (x) => {
      const back = toRaw(codec, decimalOf(x)!)
      return back.kind === 'raw' && Math.abs(toPhysical(codec, back.raw) - x) <= 2 ** -25
    }), { seed, numRuns: 2000 })
  })
})

describe('f32', () => {
  it('keeps every finite pattern but −0', () => {
    const codec = codecOf('f32')
    fc.assert(fc.property(fc.integer({ min: 0, max: 0xffffffff }), (bits) => {
      const value = f32ToDouble(bits)
      fc.pre(Number.isFinite(value) && bits !== 0x80000000)
      const back = toRaw(codec, decimalOf(value)!)
      return back.kind === 'raw' && back.raw === bits
    }), { seed, numRuns: 10_000 })
  })

  it('rounds an exact double as the engine rounds it (IEEE 754 roundTiesToEven)', () => {
    const view = new DataView(new ArrayBuffer(4))
    const engine = (x: number): number => { view.setFloat32(0, x); return view.getUint32(0) }
    // doubles that are often just beside or on a tie between two binary32 values
    const beside = fc.tuple(fc.integer({ min: 0, max: 0x7f7fffff }), fc.integer({ min: -4, max: 4 })).map(([bits, k]) => {
      const a = f32ToDouble(bits)
      const b = f32ToDouble(bits + 1)
      const middle = a + ((Number.isFinite(b) ? b : 2 ** 128) - a) / 2
      return middle * (1 + k * 2 ** -52)
    })
    fc.assert(fc.property(fc.oneof(beside, fc.double({ noNaN: true, noDefaultInfinity: true })), (x) => {
      // a rational has no negative zero
      fc.pre(!Object.is(x, -0))
      return roundToF32(bitExact(x)) === engine(x)
    }), { seed, numRuns: 10_000 })
  })

  it('rounds the typed decimal once, where going through a double would miss the tie', () => {
    // 1 + 2^-24 lies exactly between two binary32 values; the decimal below lies above it, its nearest double on it
    const typed = '1.00000005960464477539062500001'
    expect(Math.fround(Number(typed))).toBe(1)
    expect(f32ToDouble(roundToF32(parseDecimal(typed)!))).toBe(1 + 2 ** -23)
    expect(f32ToDouble(roundToF32(parseDecimal('1.000000059604644775390625')!))).toBe(1)
  })

  it('is out of range where it would round to infinity, and not a step before', () => {
    const codec = codecOf('f32')
    const middle = 2n ** 128n - 2n ** 103n
    expect(toRaw(codec, { n: middle, d: 1n })).toEqual({ kind: 'out-of-range' })
    expect(toRaw(codec, { n: middle - 1n, d: 1n })).toEqual({ kind: 'raw', raw: 0x7f7fffff })
    expect(toRaw(codec, { n: -middle, d: 1n })).toEqual({ kind: 'out-of-range' })
  })

  it('writes zero, negative zero and what underflows as +0', () => {
    const codec = codecOf('f32')
    for (const text of ['0', '-0', '-0.0', '1e-60', '-1e-60']) expect(toRaw(codec, parseDecimal(text)!)).toEqual({ kind: 'raw', raw: 0 })
  })
})
