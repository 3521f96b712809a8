import type { FindKind, FindPlace } from '../../../shared/contract/search.ts'
import type { MachineSet, Value } from '../../../shared/parameters/machine-set.ts'
import type { Parameter, ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { formatExact } from '../../../shared/units/format.ts'
import type { Machine } from '../machines/machine.entity.ts'
import type { Findable } from './words.ts'

/** One thing that can be found by its name, ready to be compared. */
export interface Row extends Findable {
  kind: FindKind
  name: string
  note: string
  at: FindPlace
}

export const hex = (address: number) => `0x${address.toString(16).toUpperCase().padStart(address > 0xff ? 4 : 2, '0')}`

type Named = Pick<Machine, 'key' | 'name'>
type Schemas = Readonly<Record<string, ParameterSchema>>

const text = (...parts: (string | number | null | undefined)[]) => parts.filter((p) => p !== null && p !== undefined).join(' ').toLowerCase()

const shown = (value: Value, unit: string | null) => `${typeof value === 'boolean' ? (value ? 'on' : 'off') : formatExact(value)}${unit ? ` ${unit}` : ''}`

function valueRows({ machine, owner, values, parameters, at }: { machine: Named; owner: string; values: Readonly<Record<string, Value>>; parameters: ReadonlyMap<string, Parameter>; at: FindPlace }): Row[] {
  return Object.entries(values).map(([name, value]) => {
    const p = parameters.get(name)
    const said = shown(value, p?.unit ?? null)
    return {
      kind: 'value' as const, name: `${p?.title ?? name} ${said}`, note: `${owner}, ${machine.name}`, at,
      text: text(machine.name, owner, p?.title, name, p?.role, p?.unit, typeof value === 'number' ? null : String(value)),
      numbers: Number.isFinite(Number(value)) && typeof value !== 'boolean' ? [Number(value)] : [],
    }
  })
}

/** Parameters by name over the firmware versions of some joints; the first version describes what several share. */
function parametersOf(firmware: Iterable<string>, schemas: Schemas): Map<string, Parameter> {
  const found = new Map<string, Parameter>()
  for (const name of new Set(firmware)) for (const p of schemas[name]?.parameters ?? []) if (!found.has(p.name)) found.set(p.name, p)
  return found
}

/** Everything that a machine's set names: buses, families, joints, and the values given on families and joints. */
export function rowsOfSet(machine: Named, set: MachineSet, schemas: Schemas): Row[] {
  const on = machine.key
  const joints = Object.entries(set.joints)
  const busName = (key: string) => set.buses[key]?.name ?? key
  const familyName = (key: string) => set.families[key]?.name ?? key
  return [
    ...joints.map(([key, j]): Row => ({
      kind: 'joint', name: j.name, note: `${machine.name}, ${busName(j.bus)} ${hex(j.address)}, ${familyName(j.family)}`, at: { page: 'joint', machine: on, joint: key },
      text: text(machine.name, j.name, key, busName(j.bus), familyName(j.family), j.firmware), addresses: [j.address],
    })),
    ...Object.entries(set.families).map(([key, f]): Row => ({ kind: 'family', name: f.name, note: machine.name, at: { page: 'family', machine: on, family: key }, text: text(machine.name, f.name, key) })),
    ...Object.entries(set.buses).map(([key, b]): Row => ({
      kind: 'bus', name: b.name, note: machine.name, at: { page: 'bus', machine: on, bus: key }, text: text(machine.name, b.name, key, ...(b.otherDevices ?? []).map((d) => d.name)), addresses: (b.otherDevices ?? []).map((d) => d.address),
    })),
    ...Object.entries(set.families).flatMap(([key, f]) =>
      valueRows({ machine, owner: f.name, values: f.values, parameters: parametersOf(joints.filter(([, j]) => j.family === key).map(([, j]) => j.firmware), schemas), at: { page: 'family', machine: on, family: key } })),
    ...joints.flatMap(([key, j]) => valueRows({ machine, owner: j.name, values: j.values, parameters: parametersOf([j.firmware], schemas), at: { page: 'joint', machine: on, joint: key } })),
  ]
}

/** The registers of a firmware version. */
export const rowsOfSchema = (line: string, version: string, schema: ParameterSchema): Row[] =>
  schema.parameters.map((p) => ({
    kind: 'register', name: p.title, note: `${line} ${version}${p.register ? `, register ${hex(p.register.address)}` : ', no register'}${p.unit ? `, ${p.unit}` : ''}`,
    at: { page: 'firmware', line, version }, text: text(line, version, p.title, p.name, p.role, p.unit), addresses: p.register ? [p.register.address] : [],
  }))
