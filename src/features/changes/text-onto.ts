import { editsBetween, same } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { valueAt } from '../../../shared/parameters/paths.ts'
import { editText, readText, withNumericAddresses } from '../../../shared/parameters/set-text.ts'
import { conflictsBetween } from '../../../shared/parameters/three-way.ts'
import type { Keep, ValueConflict } from './edit-batches.ts'

const setOf = (text: string): MachineSet | null => {
  const read = readText(text)
  return read.ok ? (withNumericAddresses(read.document) as MachineSet) : null
}

export type TextOnto = { kind: 'text'; text: string } | { kind: 'conflicts'; conflicts: ValueConflict[] } | { kind: 'unreadable' }

const within = (inner: string, outer: string) => inner === outer || inner.startsWith(`${outer}/`)

/**
 * A text being typed, brought onto the state saved meanwhile: values altered there go into it, its own comments and layout stay.
 *
 * @param typed      the text as typed
 * @param basis      the saved text that the typing began on
 * @param now        the set as saved now
 * @param decisions  which value stays, for places that both altered
 * @returns          the text, or the places still to decide, or that one of the texts can't be read yet
 */
export function textOnto(typed: string, basis: string, now: MachineSet, decisions: ReadonlyMap<string, Keep> = new Map()): TextOnto {
  const mine = setOf(typed)
  const before = setOf(basis)
  if (!mine || !before) return { kind: 'unreadable' }
  const conflicts = conflictsBetween(before, mine, now).filter((c) => !same(c.yours, c.theirs))
  const open = conflicts.filter((c) => !decisions.has(c.pointer))
  if (open.length > 0) return { kind: 'conflicts', conflicts: open.map((c) => ({ pointer: c.pointer, yours: c.yours ?? null, now: c.theirs ?? null })) }
  const kept = conflicts.filter((c) => decisions.get(c.pointer) === 'mine').map((c) => c.pointer)
  const theirs = editsBetween(before, now).filter((e) => !kept.some((p) => within(e.pointer, p) || within(p, e.pointer)) && !same(valueAt(mine, e.pointer), e.to))
  return { kind: 'text', text: editText(typed, theirs) }
}
