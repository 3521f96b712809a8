import type { Progress } from '../../shared/contract/checks.ts'
import type { AnalysisRequest } from './analyses/requests.ts'
import { unitsOf } from './flows.ts'

/** What somebody looks at: the check of a change, a map. */
export interface Topic {
  readonly wanted: ReadonlyMap<string, AnalysisRequest>
  readonly finished: Set<string>
  stopped: boolean
  failed: string
  readonly asker: number
}

/**
 * How far a topic is.
 *
 * @param doneOf  units done of an analysis under way
 */
export function progressOf(topic: Topic, doneOf: (hash: string) => number): Progress {
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
    done += Math.min(units, doneOf(hash))
  }
  const state = open === 0 ? 'done' : topic.failed ? 'failed' : topic.stopped ? 'stopped' : 'running'
  return { done, total, state, problem: state === 'failed' ? topic.failed : '' }
}

/** Those who want to hear when a topic's progress moved. */
export class Listeners {
  private readonly byTopic = new Map<string, Set<() => void>>()

  /** Returns the way to stop listening. */
  add(topic: string, listener: () => void): () => void {
    const own = this.byTopic.get(topic) ?? new Set()
    own.add(listener)
    this.byTopic.set(topic, own)
    return () => {
      own.delete(listener)
      if (own.size === 0) this.byTopic.delete(topic)
    }
  }

  tell(topic: string): void {
    for (const listener of this.byTopic.get(topic) ?? []) listener()
  }
}
