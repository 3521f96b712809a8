import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { LogLayout } from '../../../shared/contract/evidence.ts'
import { parseNumber } from '../../../server/jobs/logs/parse-number.ts'
import { readRows } from '../../../server/jobs/logs/read-rows.ts'

const bytes = (text: string) => new TextEncoder().encode(text)
const layout = (over: Partial<LogLayout> = {}): LogLayout => ({ delimiter: ',', decimal: '.', skipped: 1, columns: ['t', 'i', 'note'].map((name) => ({ name, unit: '', samples: [] })), notes: [], ...over })
const read = (text: string, over: Partial<LogLayout> = {}, wanted = [0, 1]) => readRows(bytes(text), layout(over), wanted, () => {})
const good = (n: number) => Array.from({ length: n }, (_, k) => `${k},0.5,x`)

describe('a number in bytes', () => {
  const parse = (text: string, point = '.') => parseNumber(bytes(text), 0, text.length, point.charCodeAt(0))

  it('is what Number reads, to the last bit', () => {
    fc.assert(fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => parse(String(value)) === value), { numRuns: 2000 })
    fc.assert(fc.property(fc.integer({ min: -999_999_999, max: 999_999_999 }), fc.integer({ min: 0, max: 9 }), (n, places) => parse((n / 10 ** places).toFixed(places)) === Number((n / 10 ** places).toFixed(places))), { numRuns: 2000 })
  })

  it('takes blanks, quotes, signs and a decimal comma; nothing else', () => {
    expect([' 1.5 ', '"2"', '+3', '-.5', '7.'].map((t) => parse(t))).toEqual([1.5, 2, 3, -0.5, 7])
    expect(parse('1,25', ',')).toBe(1.25)
    expect(['', '-', '.', '1.2.3', '1e', 'nan', '0x10', '1 2', 'Infinity', '1,5'].map((t) => parse(t))).toEqual(Array(10).fill(NaN))
  })
})

describe('the rows of a log', () => {
  it('gives the columns asked for, in any order, whatever ends the lines', () => {
    for (const end of ['\n', '\r\n', '\r']) {
      const { columns, rows, repairs } = read(['t,i,note', '0,1,a', '1,2,b', '2,3,c', ''].join(end), {}, [1, 0])
      expect(columns.map((c) => [...c])).toEqual([[1, 2, 3], [0, 1, 2]])
      expect([rows, repairs]).toEqual([3, []])
    }
  })

  it('leaves out rows of another width and rows without a number, and names the first of each', () => {
    const { rows, repairs } = read(['t,i,note', ...good(300), '300,1', '301,NaN,x', '302,,x', ...good(3), ''].join('\n'))
    expect(rows).toBe(303)
    expect(repairs).toEqual(['One row had another number of cells than 3 and was left out, the first on line 302.', '2 rows held no number in a column in use and were left out, the first on line 303 in “i”.'])
  })

  it('leaves out a last line that ends in the middle, blank lines and comments', () => {
    const { rows, repairs } = read(['t,i,note', '', '# paused', ...good(5), '6,0.'].join('\n'))
    expect([rows, repairs]).toEqual([5, ['The last line ends in the middle and was left out.']])
  })

  it('refuses a log with more than one bad row in a hundred, naming the column', () => {
    expect(() => read(['t,i,note', ...good(90), ...Array<string>(10).fill('1,broken,x'), ''].join('\n'))).toThrow(expect.objectContaining({ code: 'bad-input', details: expect.objectContaining({ field: 'column 1' }) as object }))
  })

  it('does not let an open quote swallow the rows after it', () => {
    expect(read(['t,i,note', ...good(200), '200,0.5,"open', ...good(200), ''].join('\n')).rows).toBe(401)
  })

  it('refuses a log of more than a million rows', () => {
    expect(() => readRows(bytes('1,2\n'.repeat(1_000_001)), layout({ skipped: 0, columns: layout().columns.slice(0, 2) }), [0], () => {})).toThrow(expect.objectContaining({ code: 'too-large' }))
  })

  it('never loses or makes a row, whatever the numbers', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.double({ noNaN: true, noDefaultInfinity: true })), { minLength: 1, maxLength: 60 }), (values) => {
        const { columns } = read(['t,i,note', ...values.map(([a, b]) => `${a},${b},`), ''].join('\n'))
        return values.every(([a, b], k) => columns[0][k] === a && columns[1][k] === b) && columns[0].length === values.length
      }),
    )
  })
})
