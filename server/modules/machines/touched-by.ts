import { emptySet } from '../../../shared/parameters/machine-set.ts'
import type { Change } from '../changes/change.entity.ts'
import { readSet } from '../changes/read-set.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { jointsApart } from './joints-apart.ts'

/** Answers kept, by the hashes of the texts they follow from; the longest unused goes first. Reading a large draft takes far longer than hashing it. */
const mostKept = 500
const kept = new Map<string, ReadonlySet<string>>()

/** Keys of the joints that a change touches; none while its text can't be read. */
export function touchedBy(change: Change): ReadonlySet<string> {
  const key = `${sha256(change.text)} ${change.baseRelease?.contentHash ?? ''}`
  let touched = kept.get(key)
  if (!touched) {
    const read = readSet(change.text)
    touched = read.ok ? jointsApart(read.set, change.baseRelease?.set ?? emptySet()) : new Set()
  }
  kept.delete(key)
  kept.set(key, touched)
  if (kept.size > mostKept) kept.delete(kept.keys().next().value!)
  return touched
}
