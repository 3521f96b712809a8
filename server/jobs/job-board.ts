import type { Progress } from '../../shared/contract/checks.ts'
import type { AnalysisRequest } from './analyses/requests.ts'
import { FairQueue } from './fair-queue.ts'
import { flow, Refused } from './flows.ts'
import { Job, JobEnded } from './job.ts'
import { Results, type ResultStore, type StoredOutcome } from './results.ts'
import { perform, type Outcome, type Task, type TaskResult } from './task.ts'
import { TaskRunner } from './task-runner.ts'
import type { Threads } from './threads.ts'
import { Listeners, progressOf, type Topic } from './topics.ts'

export interface BoardOptions {
  threads: Threads
  store: ResultStore
  /** milliseconds from any start */
  clock?: () => number
  limits?: Partial<Limits>
  /** told of what nobody waits for: results that could not be stored */
  warn?: (error: Error) => void
}

export interface Limits {
  /** analyses that may wait, of all people and of one */
  waiting: number
  waitingOfOne: number
  /** how long one analysis may take from its start, ms */
  jobMs: number
}
const usual: Limits = { waiting: 6000, waitingOfOne: 2500, jobMs: 600_000 }

/** What is asked when there is no room; the caller words it for the person. */
export class QueueFull extends Error {}

/** How long a piece under way may go on after its job was stopped, ms, before its thread is ended. */
const graceMs = 1000

type Known = Map<string, StoredOutcome>

interface SettleOptions {
  asker: number
  /** before what only goes on in the background */
  urgent?: boolean
  /** those that are quick enough to be done in this very thread */
  here?: (asked: AnalysisRequest) => boolean
  /** what `known` told of these before */
  before?: Known | null
}

/**
 * Analyses wanted, under way and known.
 *
 * A topic is what somebody looks at (the check of a change, a map). Analyses are shared between topics by their hash, go on while a topic wants
 * them, and are answered from the store for ever after.
 */
export class JobBoard {
  private readonly threads: Threads
  private readonly clock: () => number
  private readonly limits: Limits
  private readonly results: Results
  private readonly runner: TaskRunner
  private readonly jobs = new Map<string, Job>()
  private readonly jobQueue = new FairQueue<Job>()
  private readonly topics = new Map<string, Topic>()
  private readonly listeners = new Listeners()
  private active = 0
  private settled = 0
  private closed = false

  constructor({ threads, store, clock = () => performance.now(), limits, warn = () => {} }: BoardOptions) {
    this.threads = threads
    this.clock = clock
    this.limits = { ...usual, ...limits }
    this.results = new Results(store, warn)
    this.runner = new TaskRunner({ threads, clock, jobMs: this.limits.jobMs, advance: (job, units) => this.advance(job, units) })
  }

  /** What is known of these, from memory or the store. */
  known(asked: readonly AnalysisRequest[]): Promise<Known> {
    return this.results.known(asked)
  }

  /**
   * Every result, computed where it is not known.
   *
   * @throws QueueFull, JobEnded
   */
  async settle(asked: readonly AnalysisRequest[], { asker, urgent = false, here = () => false, before = null }: SettleOptions): Promise<Known> {
    const found = await this.results.known(asked, before)
    const missing = [...new Map(asked.filter((a) => !found.has(a.hash)).map((a) => [a.hash, a])).values()]
    const elsewhere = missing.filter((a) => !this.doHere(a, found, here))
    const topic = `settle ${(this.settled += 1)}`
    this.mustHold(elsewhere, asker)
    const jobs = elsewhere.map((a) => this.want(a, topic, { asker, urgent }))
    try {
      for (const job of jobs) found.set(job.asked.hash, await job.outcome)
    } finally {
      for (const job of jobs) this.unwant(job, topic)
    }
    return found
  }

  /** Nominal analyses that are quick enough need no thread of their own. */
  private doHere(asked: AnalysisRequest, found: Known, here: (asked: AnalysisRequest) => boolean): boolean {
    if ((asked.kind !== 'nominal' && asked.kind !== 'curves') || !here(asked) || this.jobs.has(asked.hash)) return false
    const outcome = perform(asked.kind === 'nominal' ? { kind: 'nominal', inputs: asked.inputs } : { kind: 'curves', inputs: asked.inputs })
    found.set(asked.hash, outcome)
    this.results.remember(asked.hash, outcome)
    void this.results.save({ hash: asked.hash, kind: asked.kind, outcome })
    return true
  }

  /**
   * Sets what a topic looks at, and starts what is missing. What it wanted before and nobody else wants is stopped.
   *
   * @param before  what `known` told of these before
   * @returns what is known at once
   * @throws QueueFull; the topic then wants nothing
   */
  async follow(name: string, asked: readonly AnalysisRequest[], asker: number, before: Known | null = null): Promise<Known> {
    const found = await this.results.known(asked, before)
    const wanted = new Map(asked.map((a) => [a.hash, a]))
    const earlier = this.topics.get(name)
    const sameAgain = earlier !== undefined && earlier.wanted.size === wanted.size && [...wanted.keys()].every((h) => earlier.wanted.has(h))
    if (!sameAgain) {
      this.forget(name)
      this.topics.set(name, { wanted, finished: new Set(), stopped: false, failed: '', asker })
    }
    const topic = this.topics.get(name)!
    for (const hash of found.keys()) topic.finished.add(hash)
    this.start(name, topic)
    return found
  }

  private start(name: string, topic: Topic): void {
    if (topic.stopped || topic.failed) return
    const missing = [...topic.wanted.values()].filter((a) => !topic.finished.has(a.hash))
    try {
      this.mustHold(missing, topic.asker)
    } catch (error) {
      this.forget(name)
      throw error
    }
    for (const a of missing) {
      if (this.jobs.get(a.hash)?.wantedBy.has(name)) continue
      const job = this.want(a, name, { asker: topic.asker, urgent: false })
      void job.outcome.then(
        () => topic.finished.add(a.hash),
        (error: Error) => {
          if (error instanceof JobEnded && error.state === 'stopped') return
          topic.failed ||= error.message
          this.tell(name)
        },
      )
    }
  }

  /** Ends what a topic looks at; what is known stays known. */
  private forget(name: string): void {
    for (const hash of this.topics.get(name)?.wanted.keys() ?? []) {
      const job = this.jobs.get(hash)
      if (job) this.unwant(job, name)
    }
    this.topics.delete(name)
  }

  stop(name: string): void {
    const topic = this.topics.get(name)
    if (!topic || this.progressOf(name).state !== 'running') return
    topic.stopped = true
    for (const hash of topic.wanted.keys()) {
      const job = this.jobs.get(hash)
      if (job) this.unwant(job, name)
    }
    this.tell(name)
  }

  /** Goes on with what was stopped or failed. @throws QueueFull */
  resume(name: string): void {
    const topic = this.topics.get(name)
    if (!topic) return
    topic.stopped = false
    topic.failed = ''
    this.start(name, topic)
    this.tell(name)
  }

  progressOf(name: string): Progress {
    const topic = this.topics.get(name)
    return topic ? progressOf(topic, (hash) => this.jobs.get(hash)?.done ?? 0) : { done: 0, total: 0, state: 'done', problem: '' }
  }

  /** Analyses of a topic that are done. */
  finishedOf(name: string): number {
    return this.topics.get(name)?.finished.size ?? 0
  }

  /** Hashes that a topic looks at. */
  wantedBy(name: string): string[] {
    return [...(this.topics.get(name)?.wanted.keys() ?? [])]
  }

  /** Tells when a topic's progress moved; returns the way to stop listening. */
  listen(name: string, listener: () => void): () => void {
    return this.listeners.add(name, listener)
  }

  private tell(name: string): void {
    this.listeners.tell(name)
  }

  private tellAll(job: Job): void {
    for (const name of job.wantedBy) this.tell(name)
  }

  /** A task whose outcome nobody else asks for: done beside the queue, kept nowhere. @throws WorkerLost, TimeLimit */
  aside<T extends Task>(task: T, told?: (done: number) => void, stopped?: AbortSignal): Promise<Outcome<TaskResult<T>>> {
    return this.threads.run(task, told, stopped)
  }

  /** Stops everything and waits until what is being stored is stored. */
  async close(): Promise<void> {
    this.closed = true
    for (const job of this.jobs.values()) this.end(job, new JobEnded('stopped', 'The program is closing.'))
    await this.runner.close()
    await this.results.settle()
  }

  private mustHold(missing: readonly AnalysisRequest[], asker: number): void {
    const fresh = missing.filter((a) => !this.jobs.has(a.hash)).length
    if (fresh === 0) return
    if (this.jobQueue.size + fresh > this.limits.waiting || this.jobQueue.waitingOf(asker) + fresh > this.limits.waitingOfOne)
      throw new QueueFull(`${this.jobQueue.size} analyses wait already and ${fresh} more would be too many`)
  }

  private want(asked: AnalysisRequest, topic: string, who: { asker: number; urgent: boolean }): Job {
    if (this.closed) throw new JobEnded('stopped', 'The program is closing; ask again when it is back.')
    let job = this.jobs.get(asked.hash)
    if (!job) {
      job = new Job(asked, who)
      this.jobs.set(asked.hash, job)
      // What somebody waits for begins at once: its tasks still take their turn.
      if (job.urgent) void this.runJob(job)
      else this.jobQueue.put(job.asker, job, { urgent: false })
    }
    job.wantedBy.add(topic)
    this.startJobs()
    return job
  }

  private unwant(job: Job, topic: string): void {
    job.wantedBy.delete(topic)
    if (job.wantedBy.size === 0 && !job.ended) this.end(job, new JobEnded('stopped', 'It was stopped; nothing of it was kept. Start it again.'))
  }

  /** A job's end without a result. */
  private end(job: Job, error: JobEnded): void {
    if (job.ended) return
    job.ended = true
    this.jobs.delete(job.asked.hash)
    this.jobQueue.drop((j) => j === job)
    this.runner.drop(job, error)
    setTimeout(() => job.abort.abort(), graceMs).unref()
    job.end.reject(error)
  }

  private startJobs(): void {
    while (!this.closed && this.active < this.threads.width + 2) {
      const job = this.jobQueue.take()
      if (!job) return
      this.active += 1
      void this.runJob(job).finally(() => {
        this.active -= 1
        this.startJobs()
      })
    }
  }

  private async runJob(job: Job): Promise<void> {
    job.startedAt = this.clock()
    try {
      const result = await flow(job.asked, {
        run: (task) => this.runner.run(job, task),
        advance: (units) => this.advance(job, units),
        width: this.threads.width,
        clock: this.clock,
      })
      await this.finish(job, { kind: 'result', result })
    } catch (error) {
      if (error instanceof Refused) await this.finish(job, error.outcome)
      else if (error instanceof JobEnded) this.end(job, error)
      else this.end(job, new JobEnded('failed', `It failed: ${(error as Error).message}. What was known before is kept; start it again, and tell your administrator if it fails again.`))
    }
  }

  private advance(job: Job, units: number): void {
    job.done += units
    this.tellAll(job)
  }

  private async finish(job: Job, outcome: StoredOutcome): Promise<void> {
    if (job.ended) return
    const { hash, kind } = job.asked
    await this.results.save({ hash, kind, outcome })
    if (job.ended) return
    job.ended = true
    job.done = job.total
    this.results.remember(hash, outcome)
    this.jobs.delete(hash)
    job.end.resolve(outcome)
    // Topics note the result in their own turn first.
    setImmediate(() => this.tellAll(job))
  }
}
