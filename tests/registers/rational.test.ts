import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { compare, decimalOf, heldByDouble, keepDecimal, parseDecimal, roundHalfEven, toDecimalText, toDouble } from '../../shared/registers/rational.ts'

const seed = 20261101

describe('decimals', () => {
  it('reads decimals exactly', () => {
    expect(parseDecimal('-0.35')).toEqual({ n: -35n, d: 100n })
    expect(parseDecimal('1.5e3')).toEqual({ n: 1500n, d: 1n })
    expect(decimalOf(0.35)).toEqual({ n: 35n, d: 100n })
    expect(decimalOf(1e21)).toEqual({ n: 10n ** 21n, d: 1n })
  })

  it.each(['', '.', '1.', '0x10', 'NaN', 'Infinity', '1e', '1e401', '1'.repeat(401), '--1', '1 000'])('takes %j for no decimal', (text) => {
    expect(parseDecimal(text)).toBeNull()
  })

  it.each([NaN, Infinity, -Infinity])('has no exact value for %d', (value) => {
    expect(decimalOf(value)).toBeNull()
  })

  it('knows which decimals a double holds', () => {
    expect(heldByDouble('0.1')).toBe(true)
    expect(heldByDouble('0.10')).toBe(true)
    expect(heldByDouble('9007199254740993')).toBe(false)
    expect(heldByDouble('0.1000000000000000055')).toBe(false)
    expect(keepDecimal('2.50')).toBe(2.5)
    expect(keepDecimal('0.1000000000000000055')).toBe('0.1000000000000000055')
  })

  it('rounds ties to even, on both sides of zero', () => {
    const halves = [-5n, -3n, -1n, 1n, 3n, 5n].map((n) => roundHalfEven({ n, d: 2n }))
    expect(halves).toEqual([-2n, -2n, 0n, 0n, 2n, 2n])
    expect(roundHalfEven({ n: -7n, d: 3n })).toBe(-2n)
  })
})

describe('nearest double', () => {
  it('agrees with the engine’s own reading of decimals', () => {
    const decimal = fc.tuple(fc.bigInt({ min: -(10n ** 25n), max: 10n ** 25n }), fc.integer({ min: -340, max: 290 })).map(([m, e]) => `${m}e${e}`)
    fc.assert(fc.property(decimal, (text) => Object.is(toDouble(parseDecimal(text)!) + 0, Number(text) + 0)), { seed, numRuns: 3000 })
  })

  it('gives back every double from the decimal it is written as', () => {
    fc.assert(fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (x) => toDouble(decimalOf(x)!) === x), { seed, numRuns: 3000 })
  })

  it('reaches subnormals, the largest double and infinity', () => {
    expect(toDouble({ n: 1n, d: 2n ** 1074n })).toBe(Number.MIN_VALUE)
    expect(toDouble({ n: 1n, d: 2n ** 1075n })).toBe(0)
    expect(toDouble({ n: 3n, d: 2n ** 1075n })).toBe(2 * Number.MIN_VALUE)
    expect(toDouble({ n: 2n ** 1024n - 2n ** 970n, d: 1n })).toBe(Infinity)
    expect(toDouble({ n: 2n ** 1024n - 2n ** 970n - 1n, d: 1n })).toBe(Number.MAX_VALUE)
  })
})

it('writes finite decimals and says when there is none', () => {
  fc.assert(
    fc.property(fc.bigInt({ min: -(10n ** 20n), max: 10n ** 20n }), fc.integer({ min: 0, max: 60 }), (n, k) => {
      const value = { n, d: 2n ** BigInt(k) }
      expect(compare(parseDecimal(toDecimalText(value)!)!, value)).toBe(0)
    }),
    { seed, numRuns: 500 },
  )
  expect(toDecimalText({ n: 1n, d: 3n })).toBeNull()
  expect(toDecimalText({ n: 3n, d: 6n })).toBe('0.5')
})
