// The long run of the kill tests: npx tsx tests/reliability/long.ts [SEED]; writes its figures into tests/RELIABILITY.md.
import { aBench } from './a-bench.ts'
import { Child } from './a-child.ts'
import { killedActs } from './a-prepared-folder.ts'
import { countMigrationSteps, measure, pointsOf, runMigrations, runPoints, seeded, type Point, type PointResult } from './kill-points.ts'
import { writeFigures } from './report.ts'

const seed = Number(process.argv[2] ?? 7)
/** Points at steps and after times for each act, and for each kind of migration. */
const counts = { atSteps: 50, afterTimes: 15, fresh: 25, rebuild: 35 }

async function main(): Promise<number> {
  const began = performance.now()
  const bench = await aBench('long')
  const file = bench.file('child')
  const random = seeded(seed)
  let n = 0
  /** what was seen so far: written also when the run ends early */
  const seen: PointResult[] = []
  const told = (result: PointResult) => {
    const { what, faults, done } = result
    seen.push(result)
    n += 1
    process.stdout.write(`${n}  ${what}: ${faults.length > 0 ? `FAULT ${faults.join('; ')}` : done ? 'after' : 'before'}\n`)
  }
  try {
    const child = new Child(file)
    const { steps, before, ms } = await measure(child, bench.prepared, bench.work).finally(() => child.end())
    const points = killedActs.flatMap((kind): Point[] => [
      ...pointsOf(steps[kind], counts.atSteps, random).map((kill) => ({ kind, kill })),
      ...Array.from({ length: counts.afterTimes }, () => ({ kind, afterMs: random() * ms[kind] * 1.2 })),
    ])
    const acts = await runPoints(file, bench.prepared, points, { work: bench.work, before, told })
    const migrating = await countMigrationSteps(file, bench.work)
    const kills = [...pointsOf(migrating.fresh, counts.fresh, random).map((k) => ({ ...k, rebuild: false })), ...pointsOf(migrating.rebuild, counts.rebuild, random).map((k) => ({ ...k, rebuild: true }))]
    const migrations = await runMigrations(file, kills, { work: bench.work, told })
    const all = [...acts, ...migrations]
    const bad = all.filter((r) => r.faults.length > 0)
    const row = (what: string, number: number, results: PointResult[]) => `| ${what} | ${number} | ${results.length} | ${results.filter((r) => !r.done).length} | ${results.filter((r) => r.done).length} | ${results.filter((r) => r.faults.length > 0).length} |`
    writeFigures(
      'kills',
      [
        `Seed ${seed}: ${all.length} processes killed, ${bad.length} faults, in ${((performance.now() - began) / 60_000).toFixed(1)} minutes.`,
        '',
        '| killed while | steps | points | found before | found after | faults |',
        '| --- | ---: | ---: | ---: | ---: | ---: |',
        ...killedActs.map((kind) => row(kind, steps[kind], acts.filter((r) => r.what.startsWith(kind)))),
        row('migrating a new file', migrating.fresh, migrations.filter((r) => r.what.includes('new file'))),
        row('migrating a filled file', migrating.rebuild, migrations.filter((r) => r.what.includes('filled file'))),
        ...bad.map((r) => `\n${r.what}: ${r.faults.join('; ')}`),
      ].join('\n'),
      new Date(),
    )
    return bad.length === 0 ? 0 : 1
  } catch (error) {
    const bad = seen.filter((r) => r.faults.length > 0)
    const kinds = [...new Set(seen.map((r) => r.what.split(',')[0]))]
    if (seen.length > 0)
      writeFigures('kills', `Seed ${seed}: ended early (${(error as Error).message}). Until then ${seen.length} processes killed, ${bad.length} faults: ${kinds.map((k) => `${seen.filter((r) => r.what.startsWith(k)).length} while ${k}`).join(', ')}; ${seen.filter((r) => r.done).length} found after, ${seen.filter((r) => !r.done).length} before.`, new Date())
    throw error
  } finally {
    bench.clear()
  }
}

main().then(
  (code) => process.exit(code),
  (error: Error) => {
    process.stderr.write(`${error.stack}\n`)
    process.exit(1)
  },
)
