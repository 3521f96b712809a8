import { FairQueue } from './fair-queue.ts'
import { Refused } from './flows.ts'
import { JobEnded, type Job } from './job.ts'
import type { Outcome, Task, TaskResult } from './task.ts'
import { TimeLimit, type Threads } from './threads.ts'

interface Waiting {
  task: Task
  job: Job
  attempts: number
  done: (outcome: Outcome<TaskResult<Task>>) => void
  fail: (error: Error) => void
}

export interface RunnerOptions {
  threads: Threads
  /** milliseconds from any start */
  clock: () => number
  /** how long one analysis may take from its start, ms */
  jobMs: number
  /** told of further units done within a task */
  advance: (job: Job, units: number) => void
}

const simpler = 'What was known before is kept; rates with a simpler ratio, a shorter window or fewer bounds make it quicker.'

/** Tasks of jobs on threads, in fair turns. */
export class TaskRunner {
  private readonly options: RunnerOptions
  private readonly queue = new FairQueue<Waiting>()
  private busy = 0
  private closed = false

  constructor(options: RunnerOptions) {
    this.options = options
  }

  /** @throws Refused; JobEnded when the job was stopped, took too long or its thread was lost twice */
  async run<T extends Task>(job: Job, task: T): Promise<TaskResult<T>> {
    const { clock, jobMs } = this.options
    if (job.ended) throw new JobEnded('stopped', 'It was stopped.')
    if (clock() - job.startedAt! > jobMs) throw new JobEnded('failed', `It took longer than ${jobMs / 1000} s and was ended. ${simpler}`)
    const outcome = await new Promise<Outcome<TaskResult<Task>>>((done, fail) => {
      this.queue.put(job.asker, { task, job, attempts: 0, done, fail }, { urgent: job.urgent })
      this.startTasks()
    })
    if (outcome.kind === 'refused') throw new Refused(outcome)
    return outcome.result as TaskResult<T>
  }

  /** Ends what waits of a job. */
  drop(job: Job, error: JobEnded): void {
    for (const waiting of this.queue.drop((w) => w.job === job)) waiting.fail(error)
  }

  close(): Promise<void> {
    this.closed = true
    return this.options.threads.close()
  }

  private startTasks(): void {
    while (!this.closed && this.busy < this.options.threads.width) {
      const waiting = this.queue.take()
      if (!waiting) return
      this.busy += 1
      void this.attempt(waiting).finally(() => {
        this.busy -= 1
        this.startTasks()
      })
    }
  }

  /** A thread that ends under a task does not take the request with it: once more on another, then a clear problem. */
  private async attempt(waiting: Waiting): Promise<void> {
    const { task, job } = waiting
    waiting.attempts += 1
    try {
      waiting.done(await this.options.threads.run(task, (done) => this.options.advance(job, done - job.done), job.abort.signal))
    } catch (error) {
      if (job.ended) waiting.fail(new JobEnded('stopped', 'It was stopped.'))
      else if (error instanceof TimeLimit) waiting.fail(new JobEnded('failed', `It was ended because ${error.message}. ${simpler}`))
      else if (waiting.attempts < 2) this.queue.put(job.asker, waiting, { urgent: true })
      else waiting.fail(new JobEnded('failed', `The thread that computed it ended twice (${(error as Error).message}). What was known before is kept; start it again, and tell your administrator if it ends again.`))
    }
  }
}
