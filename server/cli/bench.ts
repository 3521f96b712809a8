import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { parseArgs } from 'node:util'
import { controlWorks, timeWork, type BenchResult } from '../control/bench.ts'
import { benchKit, benchLargeMap, benchOneJoint, type BenchFigure } from '../exports/bench.ts'
import { projectRoot } from '../project-root.ts'
import { benchMachine } from './bench-machine.ts'
import { benchQuickCheck } from './bench-quick-check.ts'
import { Usage } from './usage.ts'

const seconds = () => performance.now() / 1e3

/** An export's figure, of which the median alone is told by its own bench. */
function exported(name: string, bench: (clock: () => number) => BenchFigure): BenchResult {
  const figures = Array.from({ length: 3 }, () => bench(() => performance.now())).sort((a, b) => a.milliseconds - b.milliseconds)
  return { name, median_s: figures[1].milliseconds / 1e3, min_s: figures[0].milliseconds / 1e3, max_s: figures[2].milliseconds / 1e3, runs: figures.reduce((sum, f) => sum + f.runs, 0) }
}

const milli = (s: number) => `${(s * 1e3).toPrecision(3)} ms`

/** Prints the performance figures: the control core's, a machine of 200 joints on worker threads, a check through HTTP, exports. */
export async function bench(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { json: { type: 'boolean' } } })
  if (positionals.length > 0) throw new Usage('bench takes no file.')
  const schema = JSON.parse(readFileSync(join(projectRoot(), 'examples', 'firmware', 'hinge-2.1.0.schema.json'), 'utf8')) as unknown
  const results: BenchResult[] = []
  const told = (result: BenchResult) => {
    results.push(result)
    if (!values.json) process.stdout.write(`${result.name.padEnd(18)} median ${milli(result.median_s)}, ${milli(result.min_s)} to ${milli(result.max_s)}, ${result.runs} runs${'p95_s' in result ? `, 95 % within ${milli(result.p95_s as number)}` : ''}\n`)
  }
  for (const work of controlWorks()) told(timeWork(work, 20, seconds))
  told(await benchMachine(seconds, (done, total) => { if (!values.json && process.stdout.isTTY) process.stdout.write(`\r${done} of ${total} pieces\r`) }))
  told(await benchQuickCheck(seconds, schema))
  told(exported('exports', (clock) => benchOneJoint(clock, schema, 40)))
  told(exported('kit-200', (clock) => benchKit(clock, schema, 200, 1)))
  told(exported('schema-10000', (clock) => benchLargeMap(clock, 10_000, 3)))
  if (values.json) process.stdout.write(`${JSON.stringify(results, null, 2)}\n`)
  return 0
}
