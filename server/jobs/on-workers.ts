import { MessageChannel } from 'node:worker_threads'
import { Piscina } from 'piscina'
import { telling, type Outcome, type Task, type TaskResult, type Told } from './task.ts'
import { TimeLimit, WorkerLost, type Threads } from './threads.ts'

export interface WorkerOptions {
  workerFile: string
  threads: number
  /** how long one task may take before its thread is ended, ms; pieces are cut to a fraction of it */
  limitMs?: number
  /** MiB of heap a thread may grow to */
  heapMiB?: number
  execArgv?: string[]
}

/** Worker threads, one task each at a time; a thread that ends or is ended is replaced by the next task. */
export function onWorkers({ workerFile, threads, limitMs = 60_000, heapMiB = 512, execArgv }: WorkerOptions): Threads {
  const pool = new Piscina<unknown, unknown>({
    filename: workerFile, minThreads: 1, maxThreads: threads, concurrentTasksPerWorker: 1, idleTimeout: 60_000,
    resourceLimits: { maxOldGenerationSizeMb: heapMiB }, ...(execArgv ? { execArgv } : {}),
  })
  return {
    width: threads,
    async run<T extends Task>(task: T, told?: Told, stopped?: AbortSignal) {
      const limit = AbortSignal.timeout(limitMs)
      const channel = telling.has(task.kind) && told ? new MessageChannel() : null
      channel?.port1.on('message', told!)
      try {
        const signal = stopped ? AbortSignal.any([limit, stopped]) : limit
        return (await pool.run({ task, port: channel?.port2 ?? null }, { signal, ...(channel ? { transferList: [channel.port2] } : {}) })) as Outcome<TaskResult<T>>
      } catch (error) {
        if (limit.aborted) throw new TimeLimit(`a piece took longer than ${limitMs / 1000} s`)
        throw new WorkerLost((error as Error).message)
      } finally {
        channel?.port1.close()
      }
    },
    close: () => pool.close({ force: true }),
  }
}
