import { effectiveValues, type Origin } from '../../../shared/parameters/effective.ts'
import { same } from '../../../shared/parameters/edits.ts'
import type { MachineSet, Value } from '../../../shared/parameters/machine-set.ts'
import { toPointer, type Pointer } from '../../../shared/parameters/paths.ts'
import type { Parameter, ParameterSchema } from '../../../shared/registers/parameter-schema.ts'

export type Schemas = Readonly<Record<string, ParameterSchema>>

/** While they are read: one and the same object, so that nothing is drawn anew for it. */
export const noSchemas: Schemas = {}

/** Where a value is looked at: the family's own, or what one joint ends up with. */
export type Place = { kind: 'family'; family: string } | { kind: 'joint'; joint: string; family: string }

/** One value at one place, with what it was in the base release. */
export interface ValueAt {
  parameter: Parameter
  place: Place
  /** undefined: there is neither a value nor a default */
  value: Value | undefined
  origin: Origin
  /** where an edit of this very place goes */
  pointer: Pointer
  /** what stands at the pointer itself; undefined while the value is inherited */
  own: Value | undefined
  /** effective value of the same place in the base release; undefined when the place is new */
  released: Value | undefined
  /** what stood at the pointer itself in the base release */
  releasedOwn: Value | undefined
  /** what would count without a value of its own; null when there is neither value nor default */
  inherited: { value: Value; origin: Origin } | null
  changed: boolean
  /** the value gives way to what is inherited, or the other way round, with the same effect */
  originChanged: boolean
}

/** Joints of a family by bus, in the order the set names them, and address. */
export function jointsOf(set: MachineSet, family: string): string[] {
  const buses = Object.keys(set.buses)
  return Object.entries(set.joints)
    .filter(([, j]) => j.family === family)
    .sort(([, a], [, b]) => buses.indexOf(a.bus) - buses.indexOf(b.bus) || a.address - b.address)
    .map(([key]) => key)
}

/** Schemas of a family's firmware versions, the most used first. */
export function schemasOfFamily(set: MachineSet, family: string, schemas: Schemas): ParameterSchema[] {
  const uses = new Map<string, number>()
  for (const joint of jointsOf(set, family)) uses.set(set.joints[joint].firmware, (uses.get(set.joints[joint].firmware) ?? 0) + 1)
  return [...uses].sort((a, b) => b[1] - a[1]).flatMap(([name]) => (Object.hasOwn(schemas, name) ? [schemas[name]] : []))
}

/** Parameters that a set gives values to: in a register, not read-only, and not the address, which the joint holds itself. */
export const isEditable = (p: Parameter) => p.register !== null && p.register.access !== 'ro' && p.role !== 'bus.address'

/** Every editable parameter of a family's firmware versions, once by name. */
export function parametersOfFamily(set: MachineSet, family: string, schemas: Schemas): Parameter[] {
  const byName = new Map<string, Parameter>()
  for (const schema of schemasOfFamily(set, family, schemas)) for (const p of schema.parameters) if (isEditable(p) && !byName.has(p.name)) byName.set(p.name, p)
  return [...byName.values()]
}

const owned = (values: Readonly<Record<string, Value>> | undefined, name: string): Value | undefined => (values && Object.hasOwn(values, name) ? values[name] : undefined)

/** The parameter as the joint's own firmware version states it; null where that version has none of this name. */
export const parameterOfJoint = (set: MachineSet, joint: string, name: string, schemas: Schemas): Parameter | null => {
  const firmware = set.joints[joint]?.firmware
  return (firmware !== undefined && Object.hasOwn(schemas, firmware) && schemas[firmware].byName.get(name)) || null
}

function effective(set: MachineSet, place: Place, parameter: Parameter): { value: Value | undefined; origin: Origin; own: Value | undefined } | null {
  if (place.kind === 'family') {
    if (!Object.hasOwn(set.families, place.family)) return null
    const own = owned(set.families[place.family].values, parameter.name)
    return { value: own ?? parameter.default ?? undefined, origin: own === undefined ? 'firmware' : 'family', own }
  }
  if (!Object.hasOwn(set.joints, place.joint) || !Object.hasOwn(set.families, set.joints[place.joint].family)) return null
  const [found] = effectiveValues(set, place.joint, [parameter])
  return { value: found?.value, origin: found?.origin ?? 'firmware', own: owned(set.joints[place.joint].values, parameter.name) }
}

function inheritedAt(set: MachineSet, place: Place, parameter: Parameter): ValueAt['inherited'] {
  const family = place.kind === 'joint' ? owned(set.families[place.family]?.values, parameter.name) : undefined
  if (family !== undefined) return { value: family, origin: 'family' }
  return parameter.default === null ? null : { value: parameter.default, origin: 'firmware' }
}

/** The parameter as the base release's firmware version had it, so that its default is that version's. */
function inBase(base: MachineSet, place: Place, parameter: Parameter, schemas: Schemas): Parameter {
  const joint = place.kind === 'joint' ? place.joint : jointsOf(base, place.family)[0]
  return (joint !== undefined && parameterOfJoint(base, joint, parameter.name, schemas)) || parameter
}

export function valueAtPlace(set: MachineSet, base: MachineSet, place: Place, parameter: Parameter, schemas: Schemas): ValueAt | null {
  const here = effective(set, place, parameter)
  if (!here) return null
  const before = effective(base, place, inBase(base, place, parameter, schemas))
  const pointer = place.kind === 'family' ? toPointer(['families', place.family, 'values', parameter.name]) : toPointer(['joints', place.joint, 'values', parameter.name])
  return {
    parameter,
    place,
    ...here,
    pointer,
    released: before?.value,
    releasedOwn: before?.own,
    inherited: inheritedAt(set, place, parameter),
    changed: before === null || !same(before.value, here.value),
    originChanged: before !== null && before.origin !== here.origin,
  }
}

/** Joints of the family whose own value hides the family's. */
export const ownValuesOf = (set: MachineSet, family: string, name: string): { joint: string; value: Value }[] =>
  jointsOf(set, family).flatMap((joint) => {
    const value = owned(set.joints[joint].values, name)
    return value === undefined ? [] : [{ joint, value }]
  })
