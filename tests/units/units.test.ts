import { describe, expect, it } from 'vitest'
import { dimension, dimensionText, sameDimension } from '../../shared/units/dimension.ts'
import { formatDigits, formatEngineering, formatExact } from '../../shared/units/format.ts'
import { convertValue, fromSi, readQuantity, toSi } from '../../shared/units/quantity.ts'
import { parseUnit } from '../../shared/units/unit.ts'

const same = (a: string, b: string): boolean => sameDimension(parseUnit(a)!.dimension, parseUnit(b)!.dimension)

describe('units', () => {
  it.each([
    ['V/(A·s)', 'V/A/s'], ['1/s', 'Hz'], ['1/s²', 's^-2'], ['1/s²', 's⁻²'], ['A·s/rad', 'mA*s/deg'], ['Ω', 'V/A'], ['\u2126', '\u03a9'],
    ['N·m', 'J'], ['kg·m²/s²', 'J'], ['rpm', 'rad/s'], ['V·s', 'H·A'], ['W', 'V·A'], ['F', 'A·s/V'], ['samples', 'counts'],
  ])('%s and %s have one dimension', (a, b) => {
    expect(same(a, b)).toBe(true)
  })

  it.each([['A·s', 'A·s/rad'], ['1', 'rad'], ['samples', '1'], ['rad/s', 'Hz']])('%s and %s do not', (a, b) => {
    expect(same(a, b)).toBe(false)
  })

  it.each(['', 'x', 'A·', '/s', 'A//s', '(A', 'A)', 'kdeg', 'mm m', 'A··s', 'constructor', 'A^10', '12', 'a'.repeat(50), '((((((A))))))'])('%j is no unit', (text) => {
    expect(parseUnit(text)).toBeNull()
  })

  it('writes dimensions for messages', () => {
    expect(dimensionText(dimension({ A: 1, s: 1, rad: -1 }))).toBe('s·A/rad')
    expect(dimensionText(dimension({}))).toBe('1')
    expect(dimensionText(dimension({ s: -2, m: -1 }))).toBe('1/(s^2·m)')
  })
})

describe('typed values', () => {
  it.each<[string, string | null, number | string, boolean]>([
    ['350 mA', 'A', 0.35, false],
    ['350mA', 'mA', 350, false],
    ['0.35', 'A', 0.35, false],
    ['.5 A', 'mA', 500, false],
    ['+2.50', 'A', 2.5, false],
    ['−5 1/s', '1/s', -5, false],
    ['3 400', 'V/(A·s)', 3400, false],
    ['3\u202f400 V/(A·s)', 'V/(A·s)', 3400, false],
    ['1e-3 V/A', 'mV/A', 1, false],
    ['12 deg', 'rad', 0.20943951023931956, true],
    ['60 rpm', 'rad/s', 6.283185307179586, true],
    ['180 deg', 'rev', 0.5, false],
    ['25 °C', 'K', 298.15, false],
    ['300 K', '°C', 26.85, false],
    ['95 %', null, 0.95, false],
    ['0.95', '%', 0.95, false],
    ['4 kHz', 'Hz', 4000, false],
    ['1 s', 'min', 1 / 60, true],
    ['0.12345678901234567 A', 'A', '0.12345678901234567', false],
    ['0.1234567890123456789 kA', 'A', '123.4567890123456789', false],
    ['5.600\u202f000\u202f02 A', 'A', 5.60000002, false],
    ['5 100 1/s', '1/s', 5100, false],
  ])('%s as %s is %s', (text, unit, value, rounded) => {
    expect(readQuantity(text, unit)).toEqual({ kind: 'value', value, rounded })
  })

  it.each([['1,5 A', /decimal comma/], ['A', /begin with a number/], ['', /begin with a number/], ['5 V', /kg/], ['5 furlong', /no unit/], ['1e999 A', /power of ten/], ['NaN', /begin with/], ['1 2.3.4', /no unit/]])('refuses %j', (text, message) => {
    const reading = readQuantity(text, 'A')
    expect(reading.kind === 'refused' ? reading.message : reading).toMatch(message)
  })

  it('goes to SI and back by the nearest double', () => {
    expect(toSi(180, 'deg')).toBe(Math.PI)
    expect(fromSi(Math.PI, 'deg')).toBe(180)
    expect(toSi(0.1, 'mA')).toBe(0.0001)
    expect(toSi('0.1', null)).toBe(0.1)
    expect(fromSi(298.15, '°C')).toBe(25)
    expect(toSi(NaN, 'A')).toBeNaN()
    expect(toSi(1, 'furlong')).toBeNaN()
  })

  it('changes units of kept values', () => {
    expect(convertValue(4000, 'mA', 'A')).toEqual({ kind: 'value', value: 4, rounded: false })
    expect(convertValue('0.1000000000000000055', 'A', 'A')).toEqual({ kind: 'value', value: '0.1000000000000000055', rounded: false })
    expect(convertValue(1, 'A', 'V').kind).toBe('refused')
  })
})

describe('formatting', () => {
  it('groups digits by three on both sides', () => {
    expect(formatExact(5.60000002)).toBe('5.600\u202f000\u202f02')
    expect(formatExact(3400)).toBe('3\u202f400')
    expect(formatExact(-1234567.25)).toBe('−1\u202f234\u202f567.25')
    expect(formatExact(0.99631)).toBe('0.99631')
    expect(formatExact('1e-9')).toBe('1e-9')
  })

  it('keeps significant digits', () => {
    expect([1.2, 0.0999999, 99.96, 1234.5, 0, -0.00012345].map((x) => formatDigits(x))).toEqual(['1.20', '0.100', '100', '1\u202f230', '0', '−0.000\u202f123'])
    expect(formatDigits(1.5e-9)).toBe('1.50e−9')
    expect(formatDigits(Infinity)).toBe('Infinity')
  })

  it.each([
    [0.00042, 'H', '420', 'µH'], [1234.5, 'Hz', '1.23', 'kHz'], [0.9999, 'A', '1.00', 'A'], [999.9, 'A', '1.00', 'kA'], [-3e-7, 'F', '−300', 'nF'],
    [0, 'A', '0', 'A'], [2500, 'rpm', '2\u202f500', 'rpm'], [0.0001, 'A·s/rad', '0.000\u202f100', 'A·s/rad'], [1e12, 'Hz', '1\u202f000', 'GHz'],
  ])('%d %s is %s %s', (value, unit, number, prefixed) => {
    expect(formatEngineering(value, unit)).toEqual({ number, unit: prefixed })
  })
})
