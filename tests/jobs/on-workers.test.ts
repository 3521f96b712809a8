import { mkdtempSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, describe, expect, it } from 'vitest'
import { onWorkers, type WorkerOptions } from '../../server/jobs/on-workers.ts'
import { WorkerLost, TimeLimit, type Threads } from '../../server/jobs/threads.ts'
import { aBoard, aNominal, settled } from './a-board.ts'

const folder = mkdtempSync(join(tmpdir(), 'detent-workers-'))
let threads: Threads | undefined
afterEach(async () => {
  await threads?.close()
  threads = undefined
})

/** Real threads on a worker of a test's own making. */
function threadsOf(name: string, body: string, options: Partial<WorkerOptions> = {}): Threads {
  const workerFile = join(folder, `${name}.mjs`)
  writeFileSync(workerFile, body)
  return (threads = onWorkers({ workerFile, threads: 1, ...options }))
}
const task = { kind: 'nominal', inputs: aNominal().inputs } as const

describe('worker threads', () => {
  it('compute what the calling thread computes', async () => {
    threads = onWorkers({ workerFile: new URL('../../server/jobs/worker.ts', import.meta.url).pathname, threads: 1, execArgv: ['--import', 'tsx'] })
    const there = await settled(aBoard({ threads }), [aNominal()])
    const here = await settled(aBoard(), [aNominal()])
    expect(there.get(aNominal().hash)).toEqual(here.get(aNominal().hash))
  })

  it('that exit under a task are told, and the next task finds a new thread', async () => {
    const pool = threadsOf('exits', "export default ({ task }) => { if (task.inputs.step.to < 1) process.exit(3); return { kind: 'refused', code: 'x', field: '', text: 'done' } }")
    await expect(pool.run(task)).rejects.toThrow(WorkerLost)
    expect(await pool.run({ ...task, inputs: { ...task.inputs, step: { ...task.inputs.step, to: 2 } } })).toMatchObject({ text: 'done' })
  })

  it('that never come back are ended at their time limit', async () => {
    const pool = threadsOf('hangs', 'export default () => { for (;;); }', { limitMs: 700 })
    await expect(pool.run(task)).rejects.toThrow(TimeLimit)
  })

  it('that grow beyond their heap are ended, and the request hears of it', async () => {
    const pool = threadsOf('grows', 'export default () => { const all = []; for (;;) all.push(new Array(1e5).fill(1.5)) }', { heapMiB: 24 })
    await expect(pool.run(task)).rejects.toThrow(WorkerLost)
  })

  it('are ended under a task that was stopped', async () => {
    const pool = threadsOf('waits', 'export default () => new Promise(() => {})')
    const stop = new AbortController()
    const running = pool.run(task, undefined, stop.signal)
    stop.abort()
    await expect(running).rejects.toThrow(WorkerLost)
  })

  it('tell how far a long task is', async () => {
    const pool = threadsOf('tells', "export default async ({ port }) => { for (const k of [1, 2, 3]) port.postMessage(k); await new Promise((r) => setTimeout(r, 50)); return { kind: 'refused', code: 'x', field: '', text: 'done' } }")
    const told: number[] = []
    await pool.run({ kind: 'retune', inputs: { model: task.inputs.model, bounds: [], gains: {}, bandwidthHz: {}, peakCurrent: null, tries: 3 } }, (n) => told.push(n))
    expect(told).toEqual([1, 2, 3])
  })
})
