import { same, type Edit } from '../../../shared/parameters/edits.ts'
import type { MachineSet, Value } from '../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import { shownValue } from './typed-value.ts'
import { editTo } from './use-typed-value.ts'
import type { ValueAt } from './value-cells.ts'

export interface WayBack {
  words: string
  edit: Edit
}

/** Ways a value can be set back: to what the base release holds in this very place, and to what is inherited. */
export function waysBack(at: ValueAt): WayBack[] {
  const ways: WayBack[] = []
  const released = editTo(at, at.releasedOwn)
  if (released && at.released !== undefined) ways.push({ words: `back to released ${shownValue(at.released)}`, edit: released })
  const inherit = editTo(at, undefined)
  if (inherit && at.inherited && !(released && same(at.releasedOwn, undefined))) ways.push({ words: `set back to ${at.inherited.origin} ${shownValue(at.inherited.value)}`, edit: inherit })
  return ways
}

/** A joint's own value becomes the family's, and the joint inherits it. */
export function promoted(at: ValueAt, set: MachineSet): Edit[] {
  const { family } = at.place
  const { name } = at.parameter
  const values: Record<string, Value> = set.families[family].values
  return [
    { pointer: toPointer(['families', family, 'values', name]), ...(Object.hasOwn(values, name) ? { from: values[name] } : {}), to: at.own },
    { pointer: at.pointer, from: at.own },
  ]
}
