import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  count, formatBytes, formatDb, formatDegrees, formatDuration, formatExact, formatFixed, formatHex, formatNumber, formatQuantity, formatTime, formatUtc,
  groupHash, parseNumber, percentChange, quantityText, stepNumberText,
} from '../../src/lib/format.ts'

const plain = (text: string) => Number(text.replaceAll('\u00a0', '').replace('\u2212', '-'))

describe('numbers', () => {
  it.each([
    [5.6, 3, '5.60'], [0.0123, 3, '0.0123'], [3400, 2, '3\u00a0400'], [-12.5, 3, '\u221212.5'], [0, 3, '0'], [99.96, 3, '100'], [9.996, 3, '10.0'],
    [1234567, 3, '1\u00a0230\u00a0000'], [0.00004567, 2, '0.000046'], [1, 1, '1'], [0.5, 1, '0.5'],
  ])('writes %d to %d digits as %s', (value, digits, text) => expect(formatNumber(value, { digits })).toBe(text))

  it('says what is no number instead of showing a figure', () => {
    expect(formatNumber(NaN)).toBe('no number')
    expect(formatNumber(-Infinity)).toBe('\u2212infinite')
  })

  it('keeps the value to the digits asked, for any double of ordinary size', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-9, max: 1e12, noNaN: true }), fc.integer({ min: 1, max: 12 }), fc.boolean(), (size, digits, negative) => {
        const value = negative ? -size : size
        expect(plain(formatNumber(value, { digits }))).toBe(Number(value.toPrecision(digits)))
      }),
    )
  })

  it('writes fixed decimals without a negative zero', () => {
    expect(formatFixed(-0.004, 2)).toBe('0.00')
    expect(formatFixed(46.44, 1)).toBe('46.4')
    expect(formatFixed(0.004, 2, { plus: true })).toBe('0.00')
    expect([formatDb(8.7), formatDegrees(-114.82)]).toEqual(['8.7', '\u2212114.8'])
  })

  it('leaves the digits of a typed decimal alone', () => {
    expect(formatExact('-0.350')).toBe('\u22120.350')
    expect(formatExact('12345.6700')).toBe('12\u00a0345.6700')
    expect(formatExact('1e400')).toBe('1e400')
  })
})

describe('quantities', () => {
  it.each([
    [0.00042, 'H', '420', 'µH', 0], [16000, 'Hz', '16.0', 'kHz', 0], [1500, 'Ω', '1.50', 'kΩ', 0], [0.9996e-3, 's', '1.00', 'ms', 0], [24, 'V', '24.0', 'V', 0], [0.0185, 'kg·m²', '0.0185', 'kg·m²', 0],
    [4.3e-6, 'kg·m²', '4.30', 'kg·m²', -6], [2.5e7, '1/s', '25.0', '1/s', 6], [82.2, '°', '82.2', '°', 0], [0.05, '%', '0.0500', '%', 0], [3e-15, 'F', '0.00300', 'pF', 0], [4e12, 'Ω', '4\u00a0000', 'GΩ', 0],
  ])('writes %d %s', (value, unit, number, shown, power) => expect(formatQuantity(value, unit)).toEqual({ number, unit: shown, power }))

  it('reads a power out as e', () => expect(quantityText(4.3e-6, 'kg·m²')).toBe('4.30e-6\u00a0kg·m²'))

  it('gives the percent change signed, and none from zero or for no change', () => {
    expect(percentChange(3.2, 5.6)).toBe('+75.0')
    expect(percentChange(14, 10)).toBe('\u221228.6')
    expect(percentChange(24, 60)).toBe('+150')
    expect(percentChange(-2, -3)).toBe('\u221250.0')
    expect(percentChange(0, 5)).toBeNull()
    expect(percentChange(5, 5)).toBeNull()
    expect(percentChange(1, 1.00001)).toBe('+0.0')
  })
})

describe('typed numbers', () => {
  it.each([['5.60', 5.6], [' \u22123 ', -3], ['3 400', 3400], ['.5', 0.5], ['1e-3', 0.001], ['+2', 2]])('reads %s', (text, value) => expect(parseNumber(text)).toMatchObject({ kind: 'number', value }))
  it.each([['', 'needed'], ['5,6', 'comma'], ['5.6 A', 'not a number'], ['1.2.3', 'not a number'], ['1e999', 'too large'], ['0x10', 'not a number'], ['Infinity', 'not a number']])('refuses "%s" in words', (text, words) => {
    const read = parseNumber(text)
    expect(read.kind === 'error' && read.message).toContain(words)
  })
  it('steps without binary dust', () => {
    expect(stepNumberText('0.1', 0.2)).toBe('0.3')
    expect(stepNumberText('5.60', 0.1)).toBe('5.70')
    expect(stepNumberText('1', 1e-6)).toBe('1.000001')
    expect(stepNumberText('x', 1)).toBeNull()
  })
})

describe('addresses, hashes, sizes, counts', () => {
  it('writes them', () => {
    expect([formatHex(0x33), formatHex(8), formatHex(0x1a2)]).toEqual(['0x33', '0x08', '0x01A2'])
    expect(groupHash('030D58033F5424', 4)).toBe('030d 5803')
    expect([formatBytes(128), formatBytes(412_000), formatBytes(4100)]).toEqual(['128 B', '412 kB', '4.1 kB'])
    expect([count(1, 'joint'), count(6, 'joint'), count(2, 'family', 'families'), count(41212, 'entry', 'entries')]).toEqual(['1 joint', '6 joints', '2 families', '41\u00a0212 entries'])
    expect([formatDuration(4.9), formatDuration(200), formatDuration(3 * 3600), formatDuration(50 * 3600)]).toEqual(['4 s', '3 min', '3 h', '2 days'])
  })
})

describe('times', () => {
  const at = '2026-11-30T23:41:07Z'
  it('writes them in the zone asked', () => {
    expect(formatTime(at, 'short', 'UTC')).toBe('30 Nov 23:41')
    expect(formatTime(at, 'long', 'Europe/Berlin')).toBe('01 Dec 2026 00:41:07')
    expect(formatTime(at, 'clock', 'UTC')).toBe('23:41:07')
    expect(formatTime(at, 'date', 'Asia/Tokyo')).toBe('01 Dec 2026')
    expect(formatUtc(at)).toBe('30 Nov 2026 23:41:07 UTC')
  })
  it('refuses what is no date', () => expect(() => formatTime('yesterday')).toThrow(RangeError))
})
