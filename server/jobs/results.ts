import type { AnalysisKind, AnalysisRequest } from './analyses/requests.ts'
import type { AnalysisResult } from './flows.ts'
import { Recent } from './recent.ts'
import type { Outcome } from './task.ts'

export type StoredOutcome = Outcome<AnalysisResult>

export interface StoredEntry {
  hash: string
  kind: AnalysisKind
  outcome: StoredOutcome
}

/** Results for ever, by hash. */
export interface ResultStore {
  load(hashes: readonly string[]): Promise<Map<string, StoredOutcome>>
  save(entries: readonly StoredEntry[]): Promise<void>
}

/** How long results are gathered before they are written together, ms: a write waits for the disk, and who asked should not wait behind it. */
const gatherMs = 5

interface Batch {
  entries: StoredEntry[]
  timer: NodeJS.Timeout
  begin: () => void
  written: Promise<void>
}

/** What is known: the last results in memory, all of them in the store. */
export class Results {
  private readonly store: ResultStore
  private readonly warn: (error: Error) => void
  private readonly recent = new Recent<StoredOutcome>(300)
  private readonly writing = new Set<Promise<void>>()
  private gathering: Batch | null = null

  /** @param warn told of what nobody waits for: results that could not be stored */
  constructor(store: ResultStore, warn: (error: Error) => void) {
    this.store = store
    this.warn = warn
  }

  /**
   * What is known of these, from memory or the store.
   *
   * @param before  what an earlier call found of them and more: the store is not asked again
   */
  async known(asked: readonly AnalysisRequest[], before: ReadonlyMap<string, StoredOutcome> | null = null): Promise<Map<string, StoredOutcome>> {
    const found = new Map<string, StoredOutcome>()
    const missing: string[] = []
    for (const hash of new Set(asked.map((a) => a.hash))) {
      const outcome = before?.get(hash) ?? this.recent.get(hash)
      if (outcome) found.set(hash, outcome)
      else missing.push(hash)
    }
    if (missing.length > 0 && !before)
      for (const [hash, outcome] of await this.store.load(missing)) {
        found.set(hash, outcome)
        this.remember(hash, outcome)
      }
    return found
  }

  remember(hash: string, outcome: StoredOutcome): void {
    this.recent.set(hash, outcome)
  }

  /** Ends when it is written, or could not be. */
  save(entry: StoredEntry): Promise<void> {
    this.gathering ??= this.newBatch()
    this.gathering.entries.push(entry)
    return this.gathering.written
  }

  private newBatch(): Batch {
    let begin = (): void => {}
    const due = new Promise<void>((resolve) => void (begin = resolve))
    const entries: StoredEntry[] = []
    const written = due.then(() => {
      this.gathering = null
      return this.store.save(entries)
    }).catch((error: Error) => this.warn(error)).finally(() => this.writing.delete(written))
    this.writing.add(written)
    return { entries, begin, written, timer: setTimeout(begin, gatherMs) }
  }

  /** Writes what is gathered now, and waits until all is written. */
  async settle(): Promise<void> {
    if (this.gathering) {
      clearTimeout(this.gathering.timer)
      this.gathering.begin()
    }
    await Promise.allSettled(this.writing)
  }
}
