import { describe, expect, it } from 'vitest'
import { guessMapping, lookAtLog } from '../../../server/jobs/logs/look-at-log.ts'

const look = (text: string | Uint8Array) => lookAtLog(typeof text === 'string' ? new TextEncoder().encode(text) : text)
const layoutOf = (text: string | Uint8Array) => {
  const found = look(text)
  if (found.kind !== 'layout') throw new Error(found.message)
  return found.layout
}
const rows = (n: number, row: (k: number) => string) => Array.from({ length: n }, (_, k) => row(k)).join('\n')

describe('the layout of a bench log', () => {
  it('reads commas, a header with units in brackets, and a guess of what is what', () => {
    const layout = layoutOf(`time [ms],set-point (deg),position [deg],omega [rpm],i_q (mA),u / V\n${rows(20, (k) => `${k},1.5,${k / 10},3,250,4.5`)}\n`)
    expect(layout).toMatchObject({ delimiter: ',', decimal: '.', skipped: 1, notes: [] })
    expect(layout.columns.map((c) => [c.name, c.unit])).toEqual([['time', 'ms'], ['set-point', 'deg'], ['position', 'deg'], ['omega', 'rpm'], ['i_q', 'mA'], ['u', 'V']])
    expect(guessMapping(layout.columns)).toEqual([
      { signal: 'time', column: 0, unit: 'ms' }, { signal: 'set-point', column: 1, unit: 'deg' }, { signal: 'position', column: 2, unit: 'deg' },
      { signal: 'speed', column: 3, unit: 'rpm' }, { signal: 'current', column: 4, unit: 'mA' }, { signal: 'voltage', column: 5, unit: 'V' },
    ])
  })

  it('reads semicolons with decimal commas, a byte order mark, lines above and a line of units', () => {
    const layout = layoutOf(`\uFEFF# bench logger\nrun 7\nt;speed;current\ns;rpm;A\n${rows(20, (k) => `${k / 1000};1,5;-0,25`.replace('.', ','))}\n`)
    expect(layout).toMatchObject({ delimiter: ';', decimal: ',', skipped: 4 })
    expect(layout.columns.map((c) => [c.name, c.unit])).toEqual([['t', 's'], ['speed', 'rpm'], ['current', 'A']])
    expect(layout.notes.join(' ')).toMatch(/byte order mark.*decimal comma.*4 lines/)
  })

  it('reads quoted cells that hold the delimiter, tabs, and a log without names', () => {
    expect(layoutOf(`"time, since start [s]","current [A]"\n${rows(9, (k) => `"${k}","0.5"`)}`).columns.map((c) => c.name)).toEqual(['time, since start', 'current'])
    const bare = layoutOf(rows(9, (k) => `${k}\t0.25\t1e-3`))
    expect(bare).toMatchObject({ delimiter: '\t', skipped: 0 })
    expect(bare.columns.map((c) => c.name)).toEqual(['column 1', 'column 2', 'column 3'])
  })

  it('takes a row with a missing number for a row of numbers', () => {
    expect(layoutOf(`t,i,u\n0,NaN,1\n1,,2\n${rows(9, (k) => `${k + 2},0.5,3`)}`).skipped).toBe(1)
  })

  it.each([
    ['zero bytes', new Uint8Array([1, 2, 0, 4, 5]), /zero bytes/],
    ['UTF-16', new Uint8Array([0xff, 0xfe, 49, 0]), /UTF-16/],
    ['blank lines', '\n\n  \n', /no lines/],
    ['prose', 'The bench was quiet.\nNothing moved.\n', /No row of numbers/],
    ['one column', rows(9, String), /one column/],
    ['a line without end', '1,'.repeat(20_000), /longer than 20 000/],
  ])('refuses %s', (_, text, words) => {
    expect(look(text)).toMatchObject({ kind: 'refused', message: expect.stringMatching(words) as string })
  })
})
