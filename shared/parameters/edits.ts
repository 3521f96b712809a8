import { toPointer, valueAt, withValueAt, type Pointer } from './paths.ts'
import type { MachineSet } from './machine-set.ts'

/** One edit of a machine set: the place, what stood there and what stands there after; undefined where nothing does. */
export interface Edit {
  pointer: Pointer
  from?: unknown
  to?: unknown
}

const isBranch = (v: unknown): v is Record<string, unknown> => typeof v === 'object' && v !== null && !Array.isArray(v)

/** Whether two JSON values are the same, whatever the order of their members. */
export function same(a: unknown, b: unknown): boolean {
  if (Object.is(a, b)) return true
  if (Array.isArray(a) && Array.isArray(b)) return a.length === b.length && a.every((v, i) => same(v, b[i]))
  if (!isBranch(a) || !isBranch(b)) return false
  const keys = Object.keys(a)
  return keys.length === Object.keys(b).length && keys.every((k) => Object.hasOwn(b, k) && same(a[k], b[k]))
}

/**
 * The edits that lead from one set to another, in document order.
 *
 * A family or joint that exists on one side only is one edit; inside those on both sides every leaf is its own.
 */
export function editsBetween(before: MachineSet, after: MachineSet): Edit[] {
  const edits: Edit[] = []
  const walk = (a: unknown, b: unknown, at: string[]) => {
    if (same(a, b)) return
    if (!isBranch(a) || !isBranch(b) || 'low' in a || 'low' in b) {
      edits.push({ pointer: toPointer(at), ...(a === undefined ? {} : { from: a }), ...(b === undefined ? {} : { to: b }) })
      return
    }
    for (const key of new Set([...Object.keys(a), ...Object.keys(b)])) walk(a[key], b[key], [...at, key])
  }
  walk(before, after, [])
  return edits
}

/** Applies edits in order; the caller has checked each edit's `from` (see conflictsWith). */
export const applyEdits = (set: MachineSet, edits: readonly Edit[]): MachineSet => edits.reduce((s, e) => withValueAt(s, e.pointer, e.to), set)

/** The edits whose place no longer holds what their writer saw; each with what stands there now. */
export const conflictsWith = (set: MachineSet, edits: readonly Edit[]): { edit: Edit; now: unknown }[] =>
  edits.flatMap((edit) => {
    const now = valueAt(set, edit.pointer)
    return same(now, edit.from) || same(now, edit.to) ? [] : [{ edit, now }]
  })

/** The edits that take back the given ones. */
export const inverse = (edits: readonly Edit[]): Edit[] => edits.map(({ pointer, from, to }) => ({ pointer, from: to, to: from })).reverse()
