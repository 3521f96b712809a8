import { editsBetween, same, type Edit } from './edits.ts'
import type { MachineSet } from './machine-set.ts'
import { fromPointer, toPointer, valueAt, withValueAt, type Pointer } from './paths.ts'

/** A place where two sets, both made from one base, want different things. Undefined: nothing stands there. */
export interface Conflict {
  pointer: Pointer
  base?: unknown
  yours?: unknown
  theirs?: unknown
}

export interface Decision {
  pointer: Pointer
  keep: 'yours' | 'theirs'
}

const within = (inner: Pointer, outer: Pointer) => inner === outer || inner.startsWith(`${outer}/`)

/** The value of a family that both sides reach: altered for all there, for one joint here. */
function jointPointers(edit: Edit, sets: readonly MachineSet[]): Pointer[] {
  const [top, key, part, name] = fromPointer(edit.pointer)
  if (top !== 'families' || part !== 'values' || name === undefined) return []
  const joints = new Set(sets.flatMap((s) => Object.entries(s.joints).filter(([, j]) => j.family === key).map(([k]) => k)))
  return [...joints].map((joint) => toPointer(['joints', joint, 'values', name]))
}

const conflictAt = (pointer: Pointer, base: MachineSet, yours: MachineSet, theirs: MachineSet): Conflict => ({
  pointer,
  base: valueAt(base, pointer),
  yours: valueAt(yours, pointer),
  theirs: valueAt(theirs, pointer),
})

/**
 * Where a draft and a newer release, both made from one base, differ about the same thing.
 *
 * The same place altered both ways is a conflict; so is a joint's own value here and its family's value there, since both alter
 * the joint's effective value or its origin.
 */
export function conflictsBetween(base: MachineSet, yours: MachineSet, theirs: MachineSet): Conflict[] {
  const mine = editsBetween(base, yours)
  const others = editsBetween(base, theirs)
  const places = new Set<Pointer>()
  for (const edit of mine)
    for (const other of others) {
      if (within(edit.pointer, other.pointer) || within(other.pointer, edit.pointer)) {
        if (edit.pointer !== other.pointer || !same(edit.to, other.to)) places.add(edit.pointer.length < other.pointer.length ? edit.pointer : other.pointer)
      }
      for (const joint of jointPointers(edit, [yours, theirs])) if (within(other.pointer, joint)) places.add(joint)
      for (const joint of jointPointers(other, [yours, theirs])) if (within(edit.pointer, joint)) places.add(joint)
    }
  return [...places].sort().map((p) => conflictAt(p, base, yours, theirs))
}

/** The draft's edits laid over the newer release, conflicts as decided. @throws RangeError naming a conflict without a decision */
export function laidOver(base: MachineSet, yours: MachineSet, theirs: MachineSet, decisions: readonly Decision[]): MachineSet {
  const conflicts = conflictsBetween(base, yours, theirs)
  const decided = new Map(decisions.map((d) => [d.pointer, d.keep]))
  const open = conflicts.find((c) => !decided.has(c.pointer))
  if (open) throw new RangeError(`${open.pointer} is not decided`)
  let result = theirs
  for (const edit of editsBetween(base, yours)) {
    if (conflicts.some((c) => within(edit.pointer, c.pointer))) continue
    result = put(result, edit.pointer, edit.to)
  }
  for (const c of conflicts) result = put(result, c.pointer, decided.get(c.pointer) === 'yours' ? c.yours : c.theirs)
  return result
}

/** Sets a value whose parent may be gone; then it has nowhere to stand and falls away with it. */
function put(set: MachineSet, pointer: Pointer, value: unknown): MachineSet {
  const parent = pointer.slice(0, pointer.lastIndexOf('/'))
  return parent !== '' && valueAt(set, parent) === undefined ? set : withValueAt(set, pointer, value)
}
