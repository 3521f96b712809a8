import type { CarryOverPreview, CarryRow } from '../../../shared/contract/firmware.ts'
import type { Edit } from '../../../shared/parameters/edits.ts'
import type { MachineSet, Value, Values } from '../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import { carryOver, type CarriedSet } from '../../../shared/registers/carry-over.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { problemOfValue } from '../../../shared/registers/value-check.ts'
import type { CarryVersions } from './carry-versions.ts'
import { movedDefaults } from './moved-defaults.ts'

export type CarryPlan = Omit<CarryOverPreview, 'seen'>

interface Place {
  place: CarryRow['place']
  key: string
  values: Values
}

const pointerIn = ({ place, key }: Place, name: string) => toPointer([place === 'family' ? 'families' : 'joints', key, 'values', name])

/** Values of one place on their way: rows to show, edits to make, and what stays because it needs a person. */
class Carrying {
  readonly rows: CarryRow[] = []
  readonly edits: Edit[] = []
  readonly problems: CarryPlan['problems'] = []
  private readonly versions: CarryVersions

  constructor(versions: CarryVersions) {
    this.versions = versions
  }

  private unitsOf(from: string | null, to: string | null) {
    const unit = (schema: ParameterSchema, name: string | null) => (name === null ? '' : (schema.byName.get(name)?.unit ?? ''))
    return { fromUnit: unit(this.versions.from, from), toUnit: unit(this.versions.to, to) }
  }

  carry(values: Values): CarriedSet {
    const { from, fromVersion, to } = this.versions
    return carryOver(values, { from, fromVersion, to, addDefaults: false })
  }

  /**
   * Everything a place holds, by its own steps.
   *
   * @param already  a joint that takes the place's values in the new version's units by now; null for none
   */
  whole(place: Place, already: string | null = null) {
    const carried = this.carry(place.values)
    const told = (name: string, detail: string) => this.problems.push({ pointer: pointerIn(place, name), detail })
    for (const step of carried.steps) {
      const { from, to, before, after } = step
      if (from === null) continue
      if (to !== null && to !== from && Object.hasOwn(place.values, to)) {
        told(from, `${from} is called ${to} in the new version, where a value of that name stands already. Both stay; take one of them out.`)
        continue
      }
      if (step.kind === 'converted' && already !== null) {
        told(from, `${already} is on the new version already and takes this value in ${this.unitsOf(from, to).toUnit || 'no unit'}; nobody can say which unit it is in. It stays as it is.`)
        continue
      }
      this.rows.push({ place: place.place, key: place.key, ...step, ...this.unitsOf(from, to) })
      if (to === from && Object.is(before, after)) continue
      if (to === from) this.edits.push({ pointer: pointerIn(place, from), from: before, to: after })
      else {
        this.edits.push({ pointer: pointerIn(place, from), from: before })
        if (to !== null) this.edits.push({ pointer: pointerIn(place, to), to: after })
      }
    }
    for (const p of carried.problems) told(p.parameter, p.message)
  }

  /** A value put where none stood. */
  add(place: Place, name: string, value: Value, row: Partial<CarryRow> = {}) {
    this.rows.push({ place: place.place, key: place.key, kind: 'added', from: null, to: name, before: null, after: value, rounded: false, ...this.unitsOf(row.from ?? null, name), ...row })
    this.edits.push({ pointer: pointerIn(place, name), to: value })
    const parameter = this.versions.to.byName.get(name)
    const wrong = parameter && problemOfValue(parameter, value)
    if (wrong) this.problems.push({ pointer: pointerIn(place, name), detail: wrong.message })
  }
}

/** What the new version says to begin with, where that is not its default anyway. */
const addedBy = ({ rules, to }: CarryVersions): [string, Value][] => Object.entries(rules.defaults).filter(([name, value]) => String(to.byName.get(name)?.default ?? '') !== String(value))

/**
 * What carrying some joints of a machine over to another firmware version does to its set.
 *
 * A family's values move with it when every joint of the family moves; otherwise they stay for the others, the joints that move get values of
 * their own where a unit changes, and what can't serve both is left for a person. Nothing is lost silently.
 *
 * @param moving  keys of joints that stand on the version before
 */
export function planCarryOver(set: MachineSet, moving: readonly string[], versions: CarryVersions): CarryPlan {
  const carrying = new Carrying(versions)
  const move = new Set(moving)
  const added = addedBy(versions)
  for (const family of new Set(moving.map((j) => set.joints[j].family))) {
    const members = Object.entries(set.joints).filter(([, j]) => j.family === family)
    const here = members.filter(([key]) => move.has(key)).map(([key]) => key)
    const shared: Place = { place: 'family', key: family, values: set.families[family].values }
    const own = (joint: string): Place => ({ place: 'joint', key: joint, values: set.joints[joint].values })
    const rest = members.filter(([key]) => !move.has(key)).map(([, j]) => j)
    const staying = rest.filter((j) => j.firmware !== versions.toName)
    if (staying.length === 0) {
      carrying.whole(shared, rest[0]?.name ?? null)
      for (const [name, value] of added) if (!carriedHas(carrying, shared, name)) carrying.add(shared, name, value)
    } else split(carrying, shared, here.map(own), staying.map((j) => j.name), added)
    for (const joint of here) carrying.whole(own(joint))
  }
  for (const joint of moving) carrying.edits.push({ pointer: toPointer(['joints', joint, 'firmware']), from: versions.fromName, to: versions.toName })
  return {
    to: versions.toName,
    joints: moving.map((joint) => ({ joint, name: set.joints[joint].name, from: versions.fromName })),
    rows: carrying.rows,
    defaults: movedDefaults(set, moving, versions),
    problems: carrying.problems,
    edits: carrying.edits,
  }
}

/** Whether a place holds a value of that name after what was carried so far. */
const carriedHas = (carrying: Carrying, place: Place, name: string) =>
  carrying.rows.some((r) => r.place === place.place && r.key === place.key && r.to === name) || Object.hasOwn(place.values, name)

/** A family of which some joints stay behind: its own values are left to them. */
function split(carrying: Carrying, shared: Place, joints: readonly Place[], staying: readonly string[], added: readonly [string, Value][]) {
  const others = staying.length === 1 ? staying[0] : `${staying[0]} and ${staying.length - 1} more`
  const { steps, problems } = carrying.carry(shared.values)
  const told = (name: string, detail: string) => carrying.problems.push({ pointer: pointerIn(shared, name), detail })
  for (const { kind, from, to, before, after, rounded } of steps) {
    if (from === null) continue
    if (kind === 'dropped' || to !== from) told(from, `${from} ${kind === 'dropped' ? 'has no place in the new version' : `is called ${to} in the new version`}, but ${others} of the family still needs it. It stays; carry the whole family over, or give these joints a family of their own.`)
    else if (kind === 'converted') for (const joint of joints) if (!Object.hasOwn(joint.values, to)) carrying.add(joint, to, after!, { kind, from, before, rounded })
  }
  for (const p of problems) told(p.parameter, p.message)
  for (const [name, value] of added) for (const joint of joints) if (!Object.hasOwn(joint.values, name) && !Object.hasOwn(shared.values, name)) carrying.add(joint, name, value)
}
