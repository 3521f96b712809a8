import type { Edit } from '../../../shared/parameters/edits.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { withValueAt } from '../../../shared/parameters/paths.ts'

/** The set with edits laid over; an edit whose place somebody took away meanwhile is left to the server to refuse. */
export function laidOnto(set: MachineSet, edits: readonly Edit[]): MachineSet {
  return edits.reduce((s, e) => {
    try {
      return withValueAt(s, e.pointer, e.to)
    } catch {
      return s
    }
  }, set)
}
