import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { parseArgs } from 'node:util'
import type { BenchResult } from '../control/bench.ts'
import { projectRoot } from '../project-root.ts'
import { benchFigures, statedSizes } from './bench-figures.ts'
import { Usage } from './usage.ts'

const milli = (s: number) => `${(s * 1e3).toPrecision(3)} ms`

function line(result: BenchResult & { p95_s?: number }): string {
  const few = result.runs < 20 ? ' (it takes seconds each)' : ''
  const p95 = result.p95_s === undefined ? '' : `, 95 % within ${milli(result.p95_s)}`
  return `${result.name.padEnd(18)} median ${milli(result.median_s)}, ${milli(result.min_s)} to ${milli(result.max_s)}, ${result.runs} runs${few}${p95}\n`
}

/** Prints the performance figures: the control core's, a machine of 200 joints on worker threads, a check through HTTP, exports. */
export async function bench(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { json: { type: 'boolean' } } })
  if (positionals.length > 0) throw new Usage('bench takes no file.')
  const schema = JSON.parse(readFileSync(join(projectRoot(), 'examples', 'firmware', 'hinge-2.1.0.schema.json'), 'utf8')) as unknown
  const told = (done: number, total: number) => {
    if (process.stderr.isTTY) process.stderr.write(`\rmachine of ${statedSizes.machine.joints} joints: ${done} of ${total} pieces\r`)
  }
  const results: BenchResult[] = []
  for await (const result of benchFigures({ sizes: statedSizes, schema, now: () => performance.now() / 1e3, told })) {
    results.push(result)
    if (!values.json) process.stdout.write(line(result))
  }
  if (values.json) process.stdout.write(`${JSON.stringify(results, null, 2)}\n`)
  return 0
}
