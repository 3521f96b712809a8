import { perform, type Outcome, type Task, type TaskResult, type Told } from './task.ts'
import type { Threads } from './threads.ts'

/** Tasks in the calling thread, one after the other with a breath between: for tests and the command line. */
export const inPlace = (): Threads => ({
  width: 1,
  run: <T extends Task>(task: T, told?: Told) =>
    new Promise<Outcome<TaskResult<T>>>((done, fail) => {
      setImmediate(() => {
        try {
          done(perform(task, told))
        } catch (error) {
          fail(error as Error)
        }
      })
    }),
  close: async () => {},
})
