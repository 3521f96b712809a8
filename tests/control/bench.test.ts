import { describe, expect, it } from 'vitest'
import { BASELINE, BASELINE_BOX, controlWorks, timeWork } from '../../server/control/bench.ts'
import { sweepTolerance } from '../../server/control/tolerance.ts'
import { verdict } from '../../server/control/verdict.ts'

describe('the performance works', () => {
  it('are named, and run', () => {
    const works = controlWorks()
    expect(works.map((work) => work.name)).toEqual(['verdict', 'report', 'vertices-256', 'map-64'])
    for (const work of works.slice(0, 3)) expect(() => work.run()).not.toThrow()
  })

  it('work on the joint that the reference figures are for', () => {
    // control-cases.json, case s-001.
    expect(verdict(BASELINE).rho).toBeCloseTo(0.9756567882658697, 12)
    expect(sweepTolerance(BASELINE, BASELINE_BOX, { seed: 1, samples: 0, margins: false }).vertices.points).toBe(256)
  })

  it('are timed by the clock that is handed in', () => {
    let t = 0
    const result = timeWork({ name: 'x', inner: 2, run: () => (t += 3) }, 7, () => t)
    expect(result).toEqual({ name: 'x', median_s: 3, min_s: 3, max_s: 3, runs: 7 })
  })
})
