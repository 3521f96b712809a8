import { afterAll, beforeAll, expect, it } from 'vitest'
import { aBench, type Bench } from './a-bench.ts'
import { Child } from './a-child.ts'
import { killedActs } from './a-prepared-folder.ts'
import { countMigrationSteps, measure, pointsOf, runMigrations, runPoints, seeded, type Point } from './kill-points.ts'

// The long run of the same points, some hundreds of them: npx tsx tests/reliability/long.ts
let bench: Bench
beforeAll(async () => {
  bench = await aBench('kills')
}, 120_000)
afterAll(() => bench?.clear())

it('killed in the middle of signing, releasing or uploading: all of the act or nothing, and the repeat does it once', async () => {
  const child = new Child(bench.file('child'))
  const { steps, before, ms } = await measure(child, bench.prepared, bench.work).finally(() => child.end())
  // fewer would mean that the steps are not counted
  for (const kind of killedActs) expect(steps[kind]).toBeGreaterThan(20)
  const random = seeded(1)
  const points: Point[] = killedActs.flatMap((kind) => [...pointsOf(steps[kind], 2, random).map((kill): Point => ({ kind, kill })), { kind, afterMs: random() * ms[kind] }])
  // its COMMIT is made, its answer never leaves
  points.push({ kind: 'release', kill: { committed: 'insert into `release`' } })
  const results = await runPoints(bench.file('child'), bench.prepared, points, { work: bench.work, before })
  expect(results.filter((r) => r.faults.length > 0)).toEqual([])
  expect(results).toHaveLength(10)
  expect(results.at(-1)).toMatchObject({ done: true })
  expect(results.filter((r) => !r.done).length).toBeGreaterThan(0)
}, 180_000)

it('killed in the middle of migrating: before or after, and no row is lost', async () => {
  const steps = await countMigrationSteps(bench.file('child'), bench.work)
  const random = seeded(2)
  const kills = [...pointsOf(steps.fresh, 1, random).map((k) => ({ ...k, rebuild: false })), ...pointsOf(steps.rebuild, 3, random).map((k) => ({ ...k, rebuild: true }))]
  const results = await runMigrations(bench.file('child'), kills, { work: bench.work })
  expect(results.filter((r) => r.faults.length > 0)).toEqual([])
  expect(results).toHaveLength(4)
}, 180_000)
