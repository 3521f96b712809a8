import type { EntityManager } from '@mikro-orm/core'
import { FirmwareVersion } from '../firmware/firmware-version.entity.ts'
import { schemaOf } from '../firmware/read-schema.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import type { Machine } from '../machines/machine.entity.ts'
import { Release } from '../releases/release.entity.ts'
import { ask } from './find-stored.ts'
import { rowsOfSchema, rowsOfSet, type Row } from './release-index.ts'

/** Rows kept by what they were made from; the longest unused goes first. */
const mostKept = 128
const kept = new Map<string, Row[]>()

async function keptRows(key: string, make: () => Promise<Row[]> | Row[]): Promise<Row[]> {
  const rows = kept.get(key) ?? (await make())
  kept.delete(key)
  kept.set(key, rows)
  if (kept.size > mostKept) kept.delete(kept.keys().next().value!)
  return rows
}

/** The newest release of each machine: its number and the hash that names its content. */
async function newest(em: EntityManager, machines: readonly Machine[]): Promise<{ id: number; machine: number; hash: string }[]> {
  const on = machines.map((m) => m.id)
  if (on.length === 0) return []
  return ask(em, `select id, machine_id as machine, content_hash as hash from \`release\` r where machine_id in (${on.map(() => '?').join(', ')}) and sequence = (select max(sequence) from \`release\` where machine_id = r.machine_id)`, on)
}

/** What the newest releases of these machines name. A release never alters, so its rows are made once; a machine's own name stands in the key too. */
export async function rowsOfMachines(em: EntityManager, machines: readonly Machine[]): Promise<Row[]> {
  const rows: Row[] = machines.map((m) => ({ kind: 'machine', name: m.name, note: m.description, at: { page: 'machine', machine: m.key }, text: `${m.name} ${m.key} ${m.description}`.toLowerCase() }))
  const byId = new Map(machines.map((m) => [m.id, m]))
  for (const { id, machine, hash } of await newest(em, machines)) {
    const of = byId.get(machine)!
    const made = await keptRows(`release ${id} ${hash} ${of.key} ${of.name}`, async () => {
      const release = await em.findOneOrFail(Release, { id })
      return rowsOfSet(of, release.set, (await schemasFor(em, release.set)).schemas)
    })
    for (const row of made) rows.push(row)
  }
  return rows
}

/** Firmware versions and their registers; each schema is named by its hash. */
export async function rowsOfFirmware(em: EntityManager): Promise<Row[]> {
  type Known = { id: number; line: string; name: string; version: string; state: string; hash: string }
  const versions = await ask<Known>(em, 'select v.id, l.key as line, l.name, v.version, v.state, v.schema_hash as hash from firmware_version v join firmware_line l on l.id = v.line_id order by v.id desc', [])
  const rows: Row[] = versions.map((v) => ({
    kind: 'firmware', name: `${v.line} ${v.version}`, note: `${v.state}, ${v.name}`, at: { page: 'firmware', line: v.line, version: v.version }, text: `${v.line} ${v.name} ${v.version} ${v.state}`.toLowerCase(),
  }))
  for (const { id, hash, line, version } of versions) {
    const made = await keptRows(`schema ${hash} ${line} ${version}`, async () => rowsOfSchema(line, version, schemaOf(await em.findOneOrFail(FirmwareVersion, { id }, { populate: ['line'] })).schema))
    for (const row of made) rows.push(row)
  }
  return rows
}
