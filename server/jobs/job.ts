import type { AnalysisRequest } from './analyses/requests.ts'
import { unitsOf, type AnalysisResult } from './flows.ts'
import type { Outcome } from './task.ts'

/** Work that did not come to its end: stopped by a person, or failed. */
export class JobEnded extends Error {
  readonly state: 'stopped' | 'failed'
  constructor(state: 'stopped' | 'failed', message: string) {
    super(message)
    this.state = state
  }
}

/** One analysis under way, shared by everybody who wants it. */
export class Job {
  readonly asked: AnalysisRequest
  readonly asker: number
  readonly urgent: boolean
  readonly total: number
  /** topics that want it; without any it is stopped */
  readonly wantedBy = new Set<string>()
  readonly outcome: Promise<Outcome<AnalysisResult>>
  readonly end: { resolve: (outcome: Outcome<AnalysisResult>) => void; reject: (error: Error) => void }
  readonly abort = new AbortController()
  done = 0
  startedAt: number | null = null
  ended = false

  constructor(asked: AnalysisRequest, { asker, urgent }: { asker: number; urgent: boolean }) {
    this.asked = asked
    this.asker = asker
    this.urgent = urgent
    this.total = unitsOf(asked)
    let end: Job['end'] | undefined
    this.outcome = new Promise((resolve, reject) => void (end = { resolve, reject }))
    this.end = end!
    // Who waits hears of a failure; a job that nobody waits for fails in silence and says so in its topic's progress.
    this.outcome.catch(() => {})
  }
}
