import { Piscina } from 'piscina'
import type { CheckResult } from '../../shared/contract/checks.ts'
import type { CheckRunner } from './check-runner.ts'

/** How long one check may take before it is ended; far beyond any honest one. */
const limitMs = 120_000

/** Checks on worker threads, one for each core but one, at most a hundred waiting. */
export function onWorkers(workerFile: string, threads: number): CheckRunner {
  const pool = new Piscina<unknown, CheckResult>({ filename: workerFile, minThreads: 1, maxThreads: threads, maxQueue: 100, idleTimeout: 60_000 })
  return {
    run: (inputs) => pool.run(inputs, { signal: AbortSignal.timeout(limitMs) }),
    close: () => pool.close(),
  }
}
