import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { readJsonText } from '../../shared/registers/json-text.ts'

const read = (text: string): unknown => {
  const reading = readJsonText(text)
  if (reading.kind === 'refused') throw new Error(`${reading.line}:${reading.column} ${reading.message}`)
  return reading.value
}

describe('JSON text', () => {
  it('reads what JSON.parse reads', () => {
    fc.assert(
      fc.property(fc.json(), (text) => {
        // JSON.parse takes a doubled key and a number no double holds; both have their own tests
        fc.pre(!/[{,]"([^"]*)":.*[,{]"\1":/.test(text))
        expect(read(text)).toEqual(JSON.parse(text))
      }),
      { seed: 20261104, numRuns: 800 },
    )
  })

  it('keeps the digits of a number that no double holds', () => {
    expect(read('[0.1, 1e400, 9007199254740993, -0.12345678901234567890, 100000000000000000000, 1.50]')).toEqual([
      0.1, '1e400', '9007199254740993', '-0.12345678901234567890', 100000000000000000000, 1.5,
    ])
  })

  it('takes comments and a byte order mark', () => {
    expect(read('\ufeff// why\n{ /* a */ "a": 1 // end\n}')).toEqual({ a: 1 })
  })

  it('sets no prototype', () => {
    const value = read('{ "__proto__": { "x": 1 }, "y": 2 }') as Record<string, unknown>
    expect(Object.getPrototypeOf(value)).toBe(Object.prototype)
    expect(Object.keys(value)).toEqual(['__proto__', 'y'])
  })

  it.each([
    ['', 1, 1],
    ['{"a":1,}', 1, 8],
    ['{"a":1 "b":2}', 1, 8],
    ['[1,\n 2', 2, 3],
    ['{\n"a":1,\n"a":2}', 3, 1],
    ['01', 1, 2],
    ['1.e5', 1, 2],
    ['"\\x"', 1, 2],
    ['"a\nb"', 1, 3],
    ['"abc', 1, 1],
    ['nul', 1, 1],
    ['NaN', 1, 1],
    ['-Infinity', 1, 1],
    ['{} x', 1, 4],
    ['/* open', 1, 1],
    ["{'a':1}", 1, 2],
  ])('refuses %j at %d:%d', (text, line, column) => {
    expect(readJsonText(text)).toMatchObject({ kind: 'refused', line, column })
  })

  it('refuses depth and length beyond the limits', () => {
    expect(readJsonText('[[[[]]]]', { length: 100, depth: 2 })).toMatchObject({ kind: 'refused', column: 4 })
    expect(readJsonText('[        ]', { length: 5, depth: 2 })).toMatchObject({ kind: 'refused' })
  })
})
