import type { EntityManager } from '@mikro-orm/core'
import type { DiffGroup, DiffRow, DiffSide, DiffView } from '../../../shared/contract/reviews.ts'
import { same } from '../../../shared/parameters/edits.ts'
import { emptySet, type MachineSet } from '../../../shared/parameters/machine-set.ts'
import { printSet } from '../../../shared/parameters/set-text.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { Change } from '../changes/change.entity.ts'
import { setOf } from '../changes/read-set.ts'
import { resolveJoint, type ResolvedJoint } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'

const hexBytes = (bytes: Uint8Array) => [...bytes].map((b) => b.toString(16).toUpperCase().padStart(2, '0')).join(' ')
const hexAddress = (address: number) => `0x${address.toString(16).toUpperCase().padStart(2, '0')}`

/** A joint's parameters as the diff shows them, by name. */
function sidesOf(resolved: ResolvedJoint | undefined): Map<string, DiffSide> {
  if (resolved?.kind !== 'resolved') return new Map()
  const rows = new Map(resolved.encoded.rows.map((r) => [r.parameter, r]))
  return new Map(resolved.values.map((v) => [v.name, { value: String(v.value), origin: v.origin, bytes: hexBytes(rows.get(v.name)?.bytes ?? new Uint8Array()), number: typeof v.value === 'number' ? v.value : null }]))
}

/** What differs of a joint besides its parameters. */
function settingRows(before: MachineSet, after: MachineSet, joint: string): DiffRow[] {
  const a = before.joints[joint]
  const b = after.joints[joint]
  const side = (value: string | undefined): DiffSide | null => (value === undefined ? null : { value, origin: 'joint', bytes: '', number: null })
  const row = (parameter: string, title: string, x: string | undefined, y: string | undefined): DiffRow[] => (x === y ? [] : [{ parameter, title, unit: '', role: null, register: null, before: side(x), after: side(y), changePercent: null }])
  return [
    ...row('family', 'Family', a && before.families[a.family]?.name, b && after.families[b.family]?.name),
    ...row('bus', 'Bus', a && before.buses[a.bus]?.name, b && after.buses[b.bus]?.name),
    ...row('address', 'Address', a && hexAddress(a.address), b && hexAddress(b.address)),
    ...row('firmware', 'Firmware', a?.firmware, b?.firmware),
    ...row('board', 'Board of the bound values', a?.board, b?.board),
  ]
}

function valueRows(before: ResolvedJoint | undefined, after: ResolvedJoint | undefined): DiffRow[] {
  const schema = (after?.kind === 'resolved' ? after.schema : before?.kind === 'resolved' ? before.schema : null) as ParameterSchema | null
  if (!schema) return []
  const old = sidesOf(before)
  const now = sidesOf(after)
  return [...new Set([...now.keys(), ...old.keys()])].flatMap((name): DiffRow[] => {
    const a = old.get(name) ?? null
    const b = now.get(name) ?? null
    if (same(a, b)) return []
    const p = schema.byName.get(name)
    const register = p?.register ? { address: p.register.address, encoding: p.register.encoding.name } : null
    const percent = a?.number != null && b?.number != null && a.number !== 0 ? (b.number / a.number - 1) * 100 : null
    return [{ parameter: name, title: p?.title ?? name, unit: p?.unit ?? '', role: p?.role ?? null, register, before: a, after: b, changePercent: percent }]
  })
}

/** Joints whose rows are the same become one group. */
function folded(rows: readonly { family: string; joint: string; rows: DiffRow[] }[]): DiffGroup[] {
  const groups: DiffGroup[] = []
  for (const { family, joint, rows: list } of rows) {
    if (list.length === 0) continue
    const alike = groups.find((g) => g.family === family && same(g.rows, list))
    if (alike) alike.joints.push(joint)
    else groups.push({ family, joints: [joint], rows: list })
  }
  return groups
}

/** Fields that differ between two flat records, as text. */
function fieldRows(a: Record<string, unknown> | undefined, b: Record<string, unknown> | undefined) {
  const text = (v: unknown) => (v === undefined ? null : typeof v === 'string' ? v : JSON.stringify(v))
  return [...new Set([...Object.keys(a ?? {}), ...Object.keys(b ?? {})])].filter((k) => !same(a?.[k], b?.[k])).map((k) => ({ field: k, before: text(a?.[k]), after: text(b?.[k]) }))
}

/** Everything that a change alters, by parameter and by text. */
export async function diffChange(em: EntityManager, change: Change): Promise<DiffView> {
  const before = change.baseRelease?.set ?? emptySet()
  const after = setOf(change.text)
  const schemas = new Map(Object.entries({ ...(await schemasFor(em, before)).schemas, ...(await schemasFor(em, after)).schemas }))
  const joints = [...new Set([...Object.keys(after.joints), ...Object.keys(before.joints)])]
  const rows = joints.map((joint) => {
    const a = Object.hasOwn(before.joints, joint) ? resolveJoint(before, joint, schemas, 0) : undefined
    const b = Object.hasOwn(after.joints, joint) ? resolveJoint(after, joint, schemas, 0) : undefined
    return { family: (after.joints[joint] ?? before.joints[joint]).family, joint, rows: [...settingRows(before, after, joint), ...valueRows(a, b)] }
  })
  const families = [...new Set([...Object.keys(after.families), ...Object.keys(before.families)])]
  const buses = [...new Set([...Object.keys(after.buses), ...Object.keys(before.buses)])]
  return {
    groups: folded(rows),
    driveTrains: families
      .map((family) => ({ family, rows: fieldRows(before.families[family]?.driveTrain, after.families[family]?.driveTrain).map(({ field, ...r }) => ({ letter: field, ...r })) }))
      .filter((f) => f.rows.length > 0),
    buses: buses.map((bus) => ({ bus, rows: fieldRows(before.buses[bus], after.buses[bus]) })).filter((b) => b.rows.length > 0),
    jointsAdded: Object.keys(after.joints).filter((j) => !Object.hasOwn(before.joints, j)),
    jointsRemoved: Object.keys(before.joints).filter((j) => !Object.hasOwn(after.joints, j)),
    textBefore: printSet(before),
    textAfter: printSet(after),
  }
}
