import { same, type Edit } from '../../../shared/parameters/edits.ts'

/** Edits that go to the server in one request. */
export interface Batch {
  edits: Edit[]
  /** sent without an answer yet: it may have reached the server, so it is repeated as it is */
  tried: boolean
}

const within = (inner: string, outer: string) => inner.startsWith(`${outer}/`)

/** Whether one edit stands inside what the other sets, so that their order matters. */
const entangled = (a: Edit, b: Edit) => within(a.pointer, b.pointer) || within(b.pointer, a.pointer)

/** Later edits folded onto earlier ones of the same place; what ends where it began drops out. */
export function folded(earlier: readonly Edit[], later: readonly Edit[]): Edit[] {
  const result = [...earlier]
  for (const edit of later) {
    const at = result.findIndex((e) => e.pointer === edit.pointer)
    if (at < 0) result.push(edit)
    else result[at] = { ...result[at], to: edit.to }
  }
  return result.filter((e) => !same(e.from, e.to))
}

/**
 * Puts edits into the queue: onto the last batch while that has not been tried and no edit stands inside another's place, since the server
 * compares every edit of a request with one and the same state; else into a batch of their own.
 */
export function enqueue(queue: readonly Batch[], edits: readonly Edit[]): Batch[] {
  const last = queue.at(-1)
  if (!last || last.tried || edits.some((e) => last.edits.some((f) => entangled(e, f)))) return [...queue, { edits: [...edits], tried: false }]
  const joined = folded(last.edits, edits)
  return joined.length > 0 ? [...queue.slice(0, -1), { ...last, edits: joined }] : queue.slice(0, -1)
}

/** A value that was saved in a place this person edited too. */
export interface ValueConflict {
  pointer: string
  /** null stands for nothing: taken away, or inherited */
  yours: unknown
  now: unknown
}

export type Keep = 'theirs' | 'mine'

/** The batch after one conflict is decided: theirs drops the edit, mine lets it say that it saw what stands there now. */
export function decided(batch: Batch, conflict: ValueConflict, keep: Keep): Batch {
  const edits =
    keep === 'theirs'
      ? batch.edits.filter((e) => e.pointer !== conflict.pointer)
      : batch.edits.map((e) => (e.pointer === conflict.pointer ? { ...e, from: conflict.now ?? undefined } : e))
  return { edits, tried: false }
}
