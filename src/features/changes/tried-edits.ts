import { createContext } from 'react'
import type { Edit } from '../../../shared/parameters/edits.ts'

/** Values that stand in fields while they are typed, not in the draft yet: the live check looks at them at every key. */
export class TriedEdits {
  private byPointer: ReadonlyMap<string, Edit> = new Map()
  private edits: readonly Edit[] = []
  private readonly listeners = new Set<() => void>()

  /** null: nothing readable stands in the field at that place, or it was settled */
  put(pointer: string, edit: Edit | null) {
    if (edit === null && !this.byPointer.has(pointer)) return
    const next = new Map(this.byPointer)
    if (edit === null) next.delete(pointer)
    else next.set(pointer, edit)
    this.byPointer = next
    this.edits = [...next.values()]
    for (const listener of this.listeners) listener()
  }

  subscribe = (listener: () => void) => {
    this.listeners.add(listener)
    return () => void this.listeners.delete(listener)
  }
  get = (): readonly Edit[] => this.edits
}

/** Null where nothing is checked while it is typed. */
export const TriesContext = createContext<TriedEdits | null>(null)
