import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { benchFigures, statedSizes } from '../../server/cli/bench-figures.ts'
import { projectRoot } from '../../server/project-root.ts'

describe('the performance figures', () => {
  it('are told by their names, each with median, least and most of its runs', { timeout: 60_000 }, async () => {
    const schema = JSON.parse(readFileSync(join(projectRoot(), 'examples', 'firmware', 'hinge-2.1.0.schema.json'), 'utf8')) as unknown
    const pieces: string[] = []
    const sizes = { runs: 2, machine: { joints: 2, runs: 1 }, checks: 3, kitJoints: 2, mapParameters: 100 }
    const figures = []
    for await (const figure of benchFigures({ sizes, schema, now: () => performance.now() / 1e3, told: (done, total) => pieces.push(`${done}/${total}`) })) figures.push(figure)
    expect(figures.map((f) => [f.name, f.runs])).toEqual([
      ['verdict', 2], ['report', 2], ['vertices-256', 2], ['map-64', 2], ['machine-200', 1], ['quick-check-http', 3], ['exports', 2], ['kit-200', 2], ['schema-10000', 2],
    ])
    for (const f of figures) {
      expect(Object.keys(f).filter((key) => key !== 'p95_s')).toEqual(['name', 'median_s', 'min_s', 'max_s', 'runs'])
      expect(f.min_s).toBeGreaterThan(0)
      expect(f.median_s).toBeGreaterThanOrEqual(f.min_s)
      expect(f.max_s).toBeGreaterThanOrEqual(f.median_s)
    }
    expect(figures.find((f) => f.name === 'quick-check-http')).toHaveProperty('p95_s')
    expect(pieces).toEqual(['1/6', '2/6', '3/6', '4/6', '5/6', '6/6'])
  })

  it('are medians of twenty runs or more, but for the machine of 200 joints', () => {
    expect(statedSizes.runs).toBeGreaterThanOrEqual(20)
    expect(statedSizes.checks).toBeGreaterThanOrEqual(20)
    expect(statedSizes.machine).toEqual({ joints: 200, runs: 5 })
  })
})
