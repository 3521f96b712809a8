import type { Outcome, Task, TaskResult, Told } from './task.ts'

/** Where tasks are done: on worker threads in the program, in the calling thread in tests. */
export interface Threads {
  /** tasks that can be under way at once */
  readonly width: number
  /**
   * @param told     hears of units done within a long task
   * @param stopped  ends the thread under the task
   * @throws WorkerLost when the thread ended under the task; TimeLimit when the task took too long
   */
  run<T extends Task>(task: T, told?: Told, stopped?: AbortSignal): Promise<Outcome<TaskResult<T>>>
  close(): Promise<void>
}

export class WorkerLost extends Error {}
export class TimeLimit extends Error {}
