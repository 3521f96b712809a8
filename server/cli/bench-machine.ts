import { availableParallelism } from 'node:os'
import { fileURLToPath } from 'node:url'
import { BASELINE, type BenchResult } from '../control/bench.ts'
import type { JointModel } from '../control/model.ts'
import { onWorkers } from '../jobs/on-workers.ts'
import type { Task } from '../jobs/task.ts'

/** No further run is begun after so long, s: a slow machine is told by fewer. */
const enough = 25
const { plant } = BASELINE
const bound = (name: string, unit: string, value: number, low: number, high: number) => ({ name, unit, nominal: value, low: value * low, high: value * high })
/** Five bounds: 32 vertices. */
const bounds = [bound('R', 'Ω', plant.R, 0.9, 1.1), bound('L', 'H', plant.L, 0.85, 1.15), bound('k_t', 'N·m/A', plant.k_t, 0.93, 1.07), bound('J_load', 'kg·m²', plant.J_load, 0.7, 1.6), bound('b_load', 'N·m·s/rad', plant.b_load, 0.5, 2)]

/** Full report and 32 vertices with margins: a joint of its own each, so that none is answered for another. */
function tasksOf(model: JointModel): Task[] {
  return [
    { kind: 'nominal', inputs: { model, step: { to: 0.5, backlash: 0, source_resistance: 0 }, heat: null } },
    { kind: 'curves', inputs: { model } },
    { kind: 'points', plan: { model, bounds, vertexNames: bounds.map((b) => b.name) }, from: 0, count: 32 },
  ]
}

export interface MachineBench {
  joints: number
  /** it takes seconds each: fewer than of the other works */
  runs: number
  /** s from any start */
  now: () => number
  told: (done: number, total: number) => void
}

/** A machine of many joints on worker threads, one for each core. */
export async function benchMachine({ joints, runs, now, told }: MachineBench): Promise<BenchResult> {
  const fromSource = import.meta.url.endsWith('.ts')
  const workerFile = fileURLToPath(new URL(fromSource ? '../jobs/worker.ts' : './worker.js', import.meta.url))
  const pool = onWorkers({ workerFile, threads: availableParallelism(), ...(fromSource ? { execArgv: ['--import', 'tsx'] } : {}) })
  const tasks = Array.from({ length: joints }, (_, k) => tasksOf({ ...BASELINE, firmware: { ...BASELINE.firmware, K_pv: BASELINE.firmware.K_pv * (0.8 + (0.4 * k) / joints) } })).flat()
  const once = async (): Promise<number> => {
    const start = now()
    let next = 0
    let done = 0
    const lane = async () => {
      while (next < tasks.length) {
        await pool.run(tasks[next++])
        told((done += 1), tasks.length)
      }
    }
    await Promise.all(Array.from({ length: pool.width }, lane))
    return now() - start
  }
  try {
    // Threads begin with their first tasks; what they load is no work of the machine.
    await Promise.all(Array.from({ length: pool.width }, async () => {
      for (const task of tasks.slice(0, 3)) await pool.run(task)
    }))
    const spent: number[] = []
    const start = now()
    while (spent.length < runs && (spent.length === 0 || now() - start < enough)) spent.push(await once())
    spent.sort((a, b) => a - b)
    return { name: 'machine-200', median_s: spent[Math.floor(spent.length / 2)], min_s: spent[0], max_s: spent[spent.length - 1], runs: spent.length }
  } finally {
    await pool.close()
  }
}
