import type { ComparedField, ComparedRegister, ComparedValue } from '../../../shared/contract/comparisons.ts'
import { same } from '../../../shared/parameters/edits.ts'
import { decodeImage } from '../../../shared/registers/decode-image.ts'
import type { Parameter, ParameterSchema, ParameterValues, Word } from '../../../shared/registers/parameter-schema.ts'
import type { SideJoint } from './side.ts'

const settingNames = { family: 'Family', bus: 'Bus', address: 'Address', firmware: 'Firmware', board: 'Board of the bound values' } as const

/** Where two joints sit and what they run, as far as it differs. */
export function compareSettings(a: SideJoint, b: SideJoint): ComparedField[] {
  return (Object.keys(settingNames) as (keyof typeof settingNames)[]).filter((k) => a.settings[k] !== b.settings[k]).map((k) => ({ field: settingNames[k], a: a.settings[k] || null, b: b.settings[k] || null }))
}

export function compareDriveTrains(a: SideJoint, b: SideJoint): ComparedField[] {
  if (!a.driveTrain || !b.driveTrain) return []
  const [x, y] = [a.driveTrain as Record<string, unknown>, b.driveTrain as Record<string, unknown>]
  const text = (v: unknown) => (v === undefined ? null : typeof v === 'string' ? v : JSON.stringify(v))
  return [...new Set([...Object.keys(x), ...Object.keys(y)])].filter((k) => !same(x[k], y[k])).map((field) => ({ field, a: text(x[field]), b: text(y[field]) }))
}

/** Name that a parameter of b had on a's firmware version. */
function nameOnA(a: ParameterSchema, b: ParameterSchema, name: string): string {
  if (a.byName.has(name)) return name
  return Object.entries(b.carry?.renames ?? {}).find(([old, now]) => now === name && a.byName.has(old))?.[0] ?? name
}

const percent = (a: ComparedValue['a'], b: ComparedValue['b'], sameUnit: boolean): number | null =>
  sameUnit && typeof a?.value === 'number' && typeof b?.value === 'number' && a.value !== 0 ? (b.value / a.value - 1) * 100 : null

/** Whether a side knows its values from bytes alone, as a read-back does: then what the registers hold is compared, not what was typed. */
const fromBytes = (joint: SideJoint) => [...joint.values.values()].some((v) => v.origin === null)

const held = (joint: SideJoint) => (joint.image ? decodeImage(joint.schema, joint.image).values : {})

function valueRow(parameter: string, nameA: string, [p, q]: [Parameter | undefined, Parameter | undefined], a: SideJoint, b: SideJoint, registers: { a: ParameterValues; b: ParameterValues } | null): ComparedValue[] {
  const before = a.values.get(nameA) ?? null
  const after = b.values.get(parameter) ?? null
  const [unitA, unitB] = [p?.unit ?? '', q?.unit ?? '']
  if (registers && unitA === unitB && same(registers.a[nameA], registers.b[parameter])) return []
  const known = before?.origin != null && after?.origin != null
  if (same(before?.value, after?.value) && (!known || before.origin === after.origin) && (!before || !after || unitA === unitB)) return []
  return [{ parameter, title: q?.title ?? p?.title ?? parameter, nameA: nameA === parameter ? null : nameA, unitA, unitB, a: before, b: after, changePercent: percent(before, after, unitA === unitB) }]
}

/** Values that differ, in the order of b's schema; what b's firmware has no more comes last. */
export function compareValues(a: SideJoint, b: SideJoint): ComparedValue[] {
  const met = new Set<string>()
  const registers = fromBytes(a) || fromBytes(b) ? { a: held(a), b: held(b) } : null
  const rows = b.schema.parameters.flatMap((q) => {
    const nameA = nameOnA(a.schema, b.schema, q.name)
    met.add(nameA)
    return valueRow(q.name, nameA, [a.schema.byName.get(nameA), q], a, b, registers)
  })
  return [...rows, ...a.schema.parameters.filter((p) => !met.has(p.name)).flatMap((p) => valueRow(p.name, p.name, [p, undefined], a, b, registers))]
}

const hex = (bytes: Uint8Array) => [...bytes].map((byte) => byte.toString(16).toUpperCase().padStart(2, '0')).join(' ')
const ownWords: Record<string, string> = { checksum: 'checksum', 'layout-id': 'layout id', release: 'release number' }

interface Wording {
  word: Word
  bytes: Uint8Array
}

/** Words that lie in the image, by place; two versions may have different words at one address. */
function wordsOf(joint: SideJoint): Map<string, Wording> {
  const { base } = joint.schema.image
  return new Map(joint.schema.words.filter((w) => w.access === 'rw').map((word) => [`${word.address}+${word.bytes}`, { word, bytes: joint.image!.subarray(word.address - base, word.address - base + word.bytes) }]))
}

const whatOf = (x: Wording | undefined, y: Wording | undefined): string => {
  const named = (w: Wording | undefined) => w && (ownWords[w.word.kind] ?? w.word.parameters.map((p) => p.title || p.name).join(', '))
  const [p, q] = [named(x), named(y)]
  return p && q && p !== q ? `${p}; ${q}` : (q ?? p ?? '')
}

/** Bytes of both images that belong to no word, where they differ, run by run. */
function gaps(a: SideJoint, b: SideJoint): ComparedRegister[] {
  const rows: ComparedRegister[] = []
  if (a.schema.image.base !== b.schema.image.base || a.image!.length !== b.image!.length) return rows
  const { base } = a.schema.image
  const owned = new Uint8Array(a.image!.length)
  for (const word of [...a.schema.words, ...b.schema.words]) owned.fill(1, Math.max(0, word.address - base), word.address - base + word.bytes)
  const differs = (k: number) => k < owned.length && owned[k] === 0 && a.image![k] !== b.image![k]
  for (let k = 0; k < owned.length; k += 1) {
    if (!differs(k)) continue
    const start = k
    while (differs(k)) k += 1
    rows.push({ address: base + start, bytes: k - start, what: 'no register', encodingA: '', encodingB: '', a: hex(a.image!.subarray(start, k)), b: hex(b.image!.subarray(start, k)) })
  }
  return rows
}

/** Words of the two images that differ, by address: those of parameters, and the image's own. */
export function compareRegisters(a: SideJoint, b: SideJoint): { registers: ComparedRegister[]; own: ComparedRegister[] } {
  if (!a.image || !b.image) return { registers: [], own: [] }
  const [x, y] = [wordsOf(a), wordsOf(b)]
  const rows = [...new Set([...x.keys(), ...y.keys()])].flatMap((place) => {
    const [p, q] = [x.get(place), y.get(place)]
    const [from, to] = [p && hex(p.bytes), q && hex(q.bytes)]
    if (from === to) return []
    const { address, bytes, kind } = (q ?? p)!.word
    return [{ own: kind !== 'parameter', row: { address, bytes, what: whatOf(p, q), encodingA: p?.word.encoding.name ?? '', encodingB: q?.word.encoding.name ?? '', a: from ?? null, b: to ?? null } }]
  })
  const byAddress = (list: ComparedRegister[]) => list.sort((m, n) => m.address - n.address || m.bytes - n.bytes)
  return { registers: byAddress([...rows.filter((r) => !r.own).map((r) => r.row), ...gaps(a, b)]), own: byAddress(rows.filter((r) => r.own).map((r) => r.row)) }
}
