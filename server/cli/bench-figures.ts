import { controlWorks, timeWork, type BenchResult } from '../control/bench.ts'
import { benchKit, benchLargeMap, benchOneJoint, type BenchFigure } from '../exports/bench.ts'
import { benchMachine } from './bench-machine.ts'
import { benchQuickCheck } from './bench-quick-check.ts'

/** How much of each work a bench does. */
export interface BenchSizes {
  /** of every work but the two below */
  runs: number
  machine: { joints: number; runs: number }
  checks: number
  kitJoints: number
  mapParameters: number
}

/** The sizes that the figures are stated for. */
export const statedSizes: BenchSizes = { runs: 20, machine: { joints: 200, runs: 5 }, checks: 60, kitJoints: 200, mapParameters: 10_000 }

export interface BenchOptions {
  sizes: BenchSizes
  /** a firmware's parameter schema, as parsed */
  schema: unknown
  /** s from any start */
  now: () => number
  /** told of the pieces of the machine that are done */
  told: (done: number, total: number) => void
}

/** An export's figure from single runs of its own bench. */
function exported(name: string, runs: number, bench: (clock: () => number) => BenchFigure, now: () => number): BenchResult {
  const spent = Array.from({ length: runs }, () => bench(() => now() * 1e3).milliseconds / 1e3).sort((a, b) => a - b)
  return { name, median_s: spent[Math.floor(runs / 2)], min_s: spent[0], max_s: spent[runs - 1], runs }
}

/** Every performance figure, one after the other: the control core's, a machine on worker threads, a check through HTTP, exports. */
export async function* benchFigures({ sizes, schema, now, told }: BenchOptions): AsyncGenerator<BenchResult & { p95_s?: number }> {
  for (const work of controlWorks()) yield timeWork(work, sizes.runs, now)
  yield benchMachine({ ...sizes.machine, now, told })
  yield benchQuickCheck(now, schema, sizes.checks)
  yield exported('exports', sizes.runs, (clock) => benchOneJoint(clock, schema, 1), now)
  yield exported('kit-200', sizes.runs, (clock) => benchKit(clock, schema, sizes.kitJoints, 1), now)
  yield exported('schema-10000', sizes.runs, (clock) => benchLargeMap(clock, sizes.mapParameters, 1), now)
}
