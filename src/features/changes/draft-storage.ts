import type { Batch } from './edit-batches.ts'

/** What of a draft is not saved yet, kept in the browser so that a dropped connection, a reload or a closed page loses nothing. */
export interface Unsaved {
  queue: Batch[]
  /** text as typed, and the saved text its typing began on */
  typed: { text: string; basis: string } | null
}

export interface DraftStorage {
  read(): Unsaved | null
  /** null: everything is saved */
  write(unsaved: Unsaved | null): void
}

/** Unsaved work of one person in one change. A browser that keeps nothing (private, full) loses the safety net, not the saving. */
export function draftStorage(person: number, change: string): DraftStorage {
  const key = `detent-draft ${person} ${change}`
  return {
    read() {
      try {
        const kept = JSON.parse(localStorage.getItem(key) ?? 'null') as Unsaved | null
        return kept && Array.isArray(kept.queue) ? kept : null
      } catch {
        return null
      }
    },
    write(unsaved) {
      try {
        if (unsaved === null) localStorage.removeItem(key)
        else localStorage.setItem(key, JSON.stringify(unsaved))
      } catch {
        // The queue in memory still holds it.
      }
    },
  }
}
