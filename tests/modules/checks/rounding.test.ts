import { describe, expect, it } from 'vitest'
import type { JointContext } from '../../../server/modules/checks/findings/joint-context.ts'
import { roundingFindings } from '../../../server/modules/checks/findings/rounding.ts'
import { aContext } from './a-context.ts'

type Row = { parameter: string; title: string; errorRelative: number | null; errorAbsolute: number }

/** A joint whose registers round as given; two parameters are gains. */
function rounded(rows: Row[]): JointContext {
  const base = aContext()
  const byName = new Map([['a', { role: 'velocity.kp' }], ['b', { role: 'current.ki' }], ['limit', { role: 'current.limit' }]])
  return { ...base, schema: { ...base.schema, byName } as unknown as JointContext['schema'], encoded: { ...base.encoded, rows } as unknown as JointContext['encoded'] }
}
const gain = (errorRelative: number | null, errorAbsolute = 0.1, parameter = 'a'): Row => ({ parameter, title: `gain ${parameter}`, errorRelative, errorAbsolute })

describe('register rounding', () => {
  it.each([
    ['at 1 %', 0.01, 'pass'],
    ['above 1 %', 0.0101, 'advise'],
    ['at 5 %', -0.05, 'advise'],
    ['above 5 %', -0.0501, 'concession needed'],
  ])('%s', (_what, error, level) => expect(roundingFindings(rounded([gain(error)]))).toMatchObject([{ level, value: expect.closeTo(Math.abs(error) * 100, 9) as number }]))

  it('names the gain that loses the most, and leaves out what is no gain', () =>
    expect(roundingFindings(rounded([gain(0.001), gain(0.03, 0.1, 'b'), gain(0.4, 1, 'limit')]))).toMatchObject([{ level: 'advise', value: 3, text: expect.stringContaining('gain b') as string }]))
  it('counts a gain of zero that is held as something else as lost whole', () => expect(roundingFindings(rounded([gain(null, 0.1)]))).toMatchObject([{ level: 'concession needed', value: 100 }]))
  it('lets a gain of zero be zero', () => expect(roundingFindings(rounded([gain(null, 0)]))).toMatchObject([{ level: 'pass', value: 0 }]))
  it('says nothing where no gain is in a register', () => expect(roundingFindings(rounded([]))).toEqual([]))
})
