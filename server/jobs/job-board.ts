import type { Progress } from '../../shared/contract/checks.ts'
import type { AnalysisKind, AnalysisRequest } from './analyses/requests.ts'
import { FairQueue } from './fair-queue.ts'
import { flow, Refused, unitsOf, type AnalysisResult } from './flows.ts'
import { Job, JobEnded } from './job.ts'
import { Recent } from './recent.ts'
import { perform, type Outcome, type Task, type TaskResult } from './task.ts'
import { TimeLimit, type Threads } from './threads.ts'

export type StoredOutcome = Outcome<AnalysisResult>

/** Results for ever, by hash. */
export interface ResultStore {
  load(hashes: readonly string[]): Promise<Map<string, StoredOutcome>>
  save(entry: { hash: string; kind: AnalysisKind; outcome: StoredOutcome }): Promise<void>
}

export interface BoardOptions {
  threads: Threads
  store: ResultStore
  /** milliseconds from any start */
  clock?: () => number
  limits?: Partial<Limits>
  /** told of what nobody waits for: a result that could not be stored */
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

interface Topic {
  wanted: ReadonlyMap<string, AnalysisRequest>
  finished: Set<string>
  stopped: boolean
  failed: string
  asker: number
}

interface Waiting {
  task: Task
  job: Job
  attempts: number
  done: (outcome: Outcome<TaskResult<Task>>) => void
  fail: (error: Error) => void
}

/** How long a piece under way may go on after its job was stopped, ms, before its thread is ended. */
const graceMs = 1000

/**
 * Analyses wanted, under way and known.
 *
 * A topic is what somebody looks at (the check of a change, a map). Analyses are shared between topics by their hash, go on while a topic wants
 * them, and are answered from the store for ever after.
 */
export class JobBoard {
  private readonly threads: Threads
  private readonly store: ResultStore
  private readonly clock: () => number
  private readonly limits: Limits
  private readonly warn: (error: Error) => void
  private readonly recent = new Recent<StoredOutcome>(300)
  private readonly jobs = new Map<string, Job>()
  private readonly jobQueue = new FairQueue<Job>()
  private readonly taskQueue = new FairQueue<Waiting>()
  private readonly topics = new Map<string, Topic>()
  private readonly listeners = new Map<string, Set<() => void>>()
  private readonly saving = new Set<Promise<void>>()
  private active = 0
  private busy = 0
  private settled = 0
  private closed = false

  constructor({ threads, store, clock = () => performance.now(), limits, warn = () => {} }: BoardOptions) {
    this.threads = threads
    this.store = store
    this.clock = clock
    this.limits = { ...usual, ...limits }
    this.warn = warn
  }

  /** What is known of these, from memory or the store. */
  async known(asked: readonly AnalysisRequest[]): Promise<Map<string, StoredOutcome>> {
    const found = new Map<string, StoredOutcome>()
    const missing: string[] = []
    for (const hash of new Set(asked.map((a) => a.hash))) {
      const outcome = this.recent.get(hash)
      if (outcome) found.set(hash, outcome)
      else missing.push(hash)
    }
    if (missing.length > 0) for (const [hash, outcome] of await this.store.load(missing)) this.keep(found, hash, outcome)
    return found
  }

  /**
   * Every result, computed where it is not known; urgent ones before what only goes on in the background.
   *
   * @param here  those that are quick enough to be done in this very thread
   * @throws QueueFull, JobEnded
   */
  async settle(asked: readonly AnalysisRequest[], { asker, urgent = false, here = () => false }: { asker: number; urgent?: boolean; here?: (asked: AnalysisRequest) => boolean }): Promise<Map<string, StoredOutcome>> {
    const found = await this.known(asked)
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
  private doHere(asked: AnalysisRequest, found: Map<string, StoredOutcome>, here: (asked: AnalysisRequest) => boolean): boolean {
    if ((asked.kind !== 'nominal' && asked.kind !== 'curves') || !here(asked) || this.jobs.has(asked.hash)) return false
    const outcome = perform(asked.kind === 'nominal' ? { kind: 'nominal', inputs: asked.inputs } : { kind: 'curves', inputs: asked.inputs })
    this.keep(found, asked.hash, outcome)
    void this.save(asked, outcome)
    return true
  }

  /**
   * Sets what a topic looks at, and starts what is missing. What it wanted before and nobody else wants is stopped.
   *
   * @returns what is known at once
   * @throws QueueFull; the topic then wants nothing
   */
  async follow(name: string, asked: readonly AnalysisRequest[], asker: number): Promise<Map<string, StoredOutcome>> {
    const found = await this.known(asked)
    const wanted = new Map(asked.map((a) => [a.hash, a]))
    const before = this.topics.get(name)
    const sameAgain = before !== undefined && before.wanted.size === wanted.size && [...wanted.keys()].every((h) => before.wanted.has(h))
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
    if (!topic) return { done: 0, total: 0, state: 'done', problem: '' }
    let done = 0
    let total = 0
    let open = 0
    for (const [hash, asked] of topic.wanted) {
      const units = unitsOf(asked)
      total += units
      if (topic.finished.has(hash)) {
        done += units
        continue
      }
      open += 1
      done += Math.min(units, this.jobs.get(hash)?.done ?? 0)
    }
    const state = open === 0 ? 'done' : topic.failed ? 'failed' : topic.stopped ? 'stopped' : 'running'
    return { done, total, state, problem: state === 'failed' ? topic.failed : '' }
  }

  /** Hashes that a topic looks at. */
  wantedBy(name: string): string[] {
    return [...(this.topics.get(name)?.wanted.keys() ?? [])]
  }

  /** Tells when a topic's progress moved; returns the way to stop listening. */
  listen(name: string, listener: () => void): () => void {
    const own = this.listeners.get(name) ?? new Set()
    own.add(listener)
    this.listeners.set(name, own)
    return () => {
      own.delete(listener)
      if (own.size === 0) this.listeners.delete(name)
    }
  }

  private tell(name: string): void {
    for (const listener of this.listeners.get(name) ?? []) listener()
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
    await this.threads.close()
    await Promise.allSettled(this.saving)
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
    for (const waiting of this.taskQueue.drop((w) => w.job === job)) waiting.fail(error)
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
        run: (task) => this.runTask(job, task),
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
    await this.save(job.asked, outcome)
    if (job.ended) return
    job.ended = true
    job.done = job.total
    this.recent.set(job.asked.hash, outcome)
    this.jobs.delete(job.asked.hash)
    job.end.resolve(outcome)
    // Topics note the result in their own turn first.
    setImmediate(() => this.tellAll(job))
  }

  private keep(found: Map<string, StoredOutcome>, hash: string, outcome: StoredOutcome): void {
    found.set(hash, outcome)
    this.recent.set(hash, outcome)
  }

  private save(asked: AnalysisRequest, outcome: StoredOutcome): Promise<void> {
    const saved = this.store.save({ hash: asked.hash, kind: asked.kind, outcome }).catch((error: Error) => this.warn(error))
    this.saving.add(saved)
    return saved.finally(() => this.saving.delete(saved))
  }

  private async runTask<T extends Task>(job: Job, task: T): Promise<TaskResult<T>> {
    if (job.ended) throw new JobEnded('stopped', 'It was stopped.')
    if (this.clock() - job.startedAt! > this.limits.jobMs)
      throw new JobEnded('failed', `It took longer than ${this.limits.jobMs / 1000} s and was ended. What was known before is kept; rates with a simpler ratio, a shorter window or fewer bounds make it quicker.`)
    const outcome = await new Promise<Outcome<TaskResult<Task>>>((done, fail) => {
      this.taskQueue.put(job.asker, { task, job, attempts: 0, done, fail }, { urgent: job.urgent })
      this.startTasks()
    })
    if (outcome.kind === 'refused') throw new Refused(outcome)
    return outcome.result as TaskResult<T>
  }

  private startTasks(): void {
    while (!this.closed && this.busy < this.threads.width) {
      const waiting = this.taskQueue.take()
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
    waiting.attempts += 1
    try {
      waiting.done(await this.threads.run(waiting.task, (done) => this.advance(waiting.job, done - waiting.job.done), waiting.job.abort.signal))
    } catch (error) {
      if (waiting.job.ended) waiting.fail(new JobEnded('stopped', 'It was stopped.'))
      else if (error instanceof TimeLimit) waiting.fail(new JobEnded('failed', `It was ended because ${error.message}. What was known before is kept; rates with a simpler ratio, a shorter window or fewer bounds make it quicker.`))
      else if (waiting.attempts < 2) this.taskQueue.put(waiting.job.asker, waiting, { urgent: true })
      else waiting.fail(new JobEnded('failed', `The thread that computed it ended twice (${(error as Error).message}). What was known before is kept; start it again, and tell your administrator if it ends again.`))
    }
  }
}
