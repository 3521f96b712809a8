import type { DiffRow, DiffSide } from '../../../shared/contract/reviews.ts'
import { same } from '../../../shared/parameters/edits.ts'
import { effectiveValues } from '../../../shared/parameters/effective.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { resolveJoint } from '../checks/resolve-joint.ts'
import type { Plain } from './marked.ts'

type Row = Plain<DiffRow>
type Schemas = ReadonlyMap<string, ParameterSchema>

/** Two sets, and the parameter schemas of both by firmware name. */
export interface Compared {
  before: MachineSet
  after: MachineSet
  schemas: Schemas
}

const hexBytes = (bytes: Uint8Array) => [...bytes].map((b) => b.toString(16).toUpperCase().padStart(2, '0')).join(' ')
export const hexAddress = (address: number) => `0x${address.toString(16).toUpperCase().padStart(2, '0')}`

/** Rows that are no parameter, by the member of the joint's settings they stand in. */
export const settingNames = ['name', 'family', 'bus', 'address', 'firmware', 'board'] as const

/** A joint's parameters as the diff shows them, by name; of a joint that can't be encoded the values without bytes. */
function sidesOf(set: MachineSet, joint: string, schemas: Schemas): Map<string, DiffSide> {
  if (!Object.hasOwn(set.joints, joint)) return new Map()
  const resolved = resolveJoint(set, joint, schemas, 0)
  const schema = schemas.get(set.joints[joint].firmware)
  const rows = new Map(resolved.kind === 'resolved' ? resolved.encoded.rows.map((r) => [r.parameter, r]) : [])
  const values = resolved.kind === 'resolved' ? resolved.values : schema ? effectiveValues(set, joint, schema.parameters.filter((p) => p.register !== null && p.register.access !== 'ro')) : []
  return new Map(values.map((v) => [v.name, { value: String(v.value), origin: v.origin, bytes: hexBytes(rows.get(v.name)?.bytes ?? new Uint8Array()), number: typeof v.value === 'number' ? v.value : null }]))
}

/** What differs of a joint besides its parameters. */
function settingRows({ before, after }: Compared, joint: string): Row[] {
  const a = Object.hasOwn(before.joints, joint) ? before.joints[joint] : undefined
  const b = after.joints[joint]
  const side = (value: string | undefined): DiffSide | null => (value === undefined ? null : { value, origin: 'joint', bytes: '', number: null })
  const row = (parameter: (typeof settingNames)[number], title: string, x: string | undefined, y: string | undefined): Row[] => (x === y ? [] : [{ parameter, title, unit: '', role: null, register: null, before: side(x), after: side(y), changePercent: null }])
  return [
    ...row('name', 'Name', a?.name, b.name),
    ...row('family', 'Family', a && before.families[a.family]?.name, after.families[b.family]?.name),
    ...row('bus', 'Bus', a && before.buses[a.bus]?.name, after.buses[b.bus]?.name),
    ...row('address', 'Address', a && hexAddress(a.address), hexAddress(b.address)),
    ...row('firmware', 'Firmware', a?.firmware, b.firmware),
    ...row('board', 'Board of the bound values', a?.board, b.board),
  ]
}

function valueRows({ before, after, schemas }: Compared, joint: string): Row[] {
  const old = sidesOf(before, joint, schemas)
  const now = sidesOf(after, joint, schemas)
  const schemaOf = (set: MachineSet) => (Object.hasOwn(set.joints, joint) ? schemas.get(set.joints[joint].firmware) : undefined)
  return [...new Set([...now.keys(), ...old.keys()])].flatMap((name): Row[] => {
    const a = old.get(name) ?? null
    const b = now.get(name) ?? null
    if (same(a, b)) return []
    const p = (b ? schemaOf(after) : schemaOf(before))?.byName.get(name)
    const register = p?.register ? { address: p.register.address, encoding: p.register.encoding.name } : null
    const percent = a?.number != null && b?.number != null && a.number !== 0 ? (b.number / a.number - 1) * 100 : null
    return [{ parameter: name, title: p?.title ?? name, unit: p?.unit ?? '', role: p?.role ?? null, register, before: a, after: b, changePercent: percent }]
  })
}

/** Everything that differs of a joint of the candidate. */
export const jointRows = (compared: Compared, joint: string): Row[] => [...settingRows(compared, joint), ...valueRows(compared, joint)]
