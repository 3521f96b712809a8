import { printSet } from '../../../../shared/parameters/set-text.ts'
import { Change } from '../../changes/change.entity.ts'
import { changeKey, findChange } from '../../changes/locate.ts'
import { setOf } from '../../changes/read-set.ts'
import { schemasFor } from '../../firmware/schemas-for.ts'
import type { SideKind } from '../side.ts'
import { jointsOfSet } from './set-joints.ts'

/** A change as it stands, or one joint of it; release number 0 in its images. */
export const changeSide: SideKind = {
  kind: 'change',
  label: 'changes',
  form: 'KEY or KEY:JOINT',
  narrows: true,
  async read(em, rest) {
    const match = /^([a-z0-9-]+)(?::([a-z0-9-]+))?$/.exec(rest)
    const change = match && (await findChange(em, match[1]))
    if (!change) return null
    const set = setOf(change.text)
    const only = match[2] ?? null
    if (only !== null && !Object.hasOwn(set.joints, only)) return null
    const name = `change ${changeKey(change)}`
    return {
      view: {
        ref: `change:${rest}`, kind: 'change', label: only === null ? name : `${set.joints[only].name} of ${name}`, note: `${change.state}: ${change.title}`,
        machine: change.machine.key, machineName: change.machine.name, release: null, change: changeKey(change),
      },
      joints: jointsOfSet(set, only, (await schemasFor(em, set)).schemas),
      narrowed: only !== null,
      text: only === null ? printSet(set) : null,
    }
  },
  async list(em, machine) {
    const changes = await em.find(Change, { machine }, { orderBy: { number: 'desc' }, limit: 500, populate: ['machine'] })
    return changes.map((c) => ({ ref: `change:${changeKey(c)}`, label: changeKey(c), note: `${c.state}: ${c.title}` }))
  },
}
