import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { runCases } from '../../server/control/cases.ts'

const file = (): Record<string, unknown> => JSON.parse(readFileSync(new URL('./vectors/control-cases.json', import.meta.url), 'utf8'))

describe('reference results of an independent program', () => {
  it('are met, every figure within its tolerance', () => {
    const { lines, passed, failed } = runCases(file())
    expect(lines).toEqual([])
    expect(failed).toBe(0)
    expect(passed).toBeGreaterThan(3900)
  })
})

describe('the case runner', () => {
  const cases = file().cases as { id: string; expect: Record<string, unknown> }[]
  const first = cases[0]

  it('fails a figure outside its tolerance', () => {
    const rho = { ...(first.expect.rho as object), value: 0.97 }
    const { failed, lines } = runCases({ cases: [{ ...first, expect: { rho } }] })
    expect(failed).toBe(1)
    expect(lines[0]).toContain(`${first.id} rho`)
  })

  it.each([
    ['an unknown section', { surprises: [{ id: 'x' }] }],
    ['an unknown figure', { cases: [{ ...first, expect: { wobble: { value: 1, tol: 1 } } }] }],
    ['an unknown loop figure', { cases: [{ ...first, expect: { loops: { velocity: { wobble: { value: 1, tol: 1 } } } } }] }],
    ['an unknown key in a figure', { cases: [{ ...first, expect: { decay_rate: { value: 24.644405779822065, tol: 1, wobble: 1 } } }] }],
    ['a case that cannot be computed', { cases: [{ ...first, plant: { R: -1 }, expect: { q: 4 } }] }],
    ['a list instead of an object', []],
  ])('counts %s as failed', (_, json) => {
    const { failed } = runCases(json)
    expect(failed).toBeGreaterThanOrEqual(1)
  })
})
