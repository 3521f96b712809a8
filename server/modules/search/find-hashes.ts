import type { Find } from '../../../shared/contract/search.ts'
import { LedgerEntry } from '../ledger/ledger-entry.entity.ts'
import { readable } from '../ledger/read-ledger.ts'
import type { HeldRole } from '../people/permissions.ts'
import { ask, placesOf, type Asking } from './find-stored.ts'

const short = (hash: string) => hash.slice(0, 12).replaceAll(/(.{4})(?=.)/g, '$1 ')

/** Everything whose SHA-256 begins with the digits asked for; each kind is found from an index of its own. */
export async function findHashes({ em, machines, words, most }: Asking, held: readonly HeldRole[], readsSomething: boolean): Promise<Find[]> {
  const prefix = words.hash
  if (prefix === null) return []
  // Hex digits end at f, so that g ends the range.
  const range = [prefix, `${prefix}g`]
  const ids = [...machines.keys()]
  const finds: Find[] = []
  const machineOf = (id: number) => machines.get(id)!
  if (ids.length > 0) {
    const on = `machine_id in (${placesOf(machines)})`
    for (const r of await ask<{ machine: number; version: string; hash: string }>(em, `select machine_id as machine, version, content_hash as hash from \`release\` where content_hash >= ? and content_hash < ? and ${on} limit ?`, [...range, ...ids, most]))
      finds.push({ name: short(r.hash), note: `content of ${machineOf(r.machine).name} ${r.version}`, at: { page: 'release', machine: machineOf(r.machine).key, version: r.version } })
    for (const c of await ask<{ machine: number; number: number; state: string; title: string; hash: string }>(em, `select machine_id as machine, number, state, title, content_hash as hash from \`change\` where content_hash >= ? and content_hash < ? and ${on} limit ?`, [...range, ...ids, most]))
      finds.push({ name: short(c.hash), note: `content of change ${machineOf(c.machine).name} ${c.number}, ${c.title}`, at: { page: 'change', change: `${machineOf(c.machine).key}-${c.number}`, draft: c.state === 'draft' } })
    for (const i of await ask<{ machine: number; version: string; joint: string; hash: string }>(em, `select r.machine_id as machine, r.version, j.name as joint, i.image_sha256 as hash from release_joint i join \`release\` r on r.id = i.release_id join joint j on j.id = i.joint_id where i.image_sha256 >= ? and i.image_sha256 < ? and r.${on} limit ?`, [...range, ...ids, most]))
      finds.push({ name: short(i.hash), note: `image of ${i.joint}, ${machineOf(i.machine).name} ${i.version}`, at: { page: 'release', machine: machineOf(i.machine).key, version: i.version } })
    for (const v of await ask<{ machine: number; key: string; joint: string; number: number; hash: string }>(em, `select j.machine_id as machine, j.key, j.name as joint, v.number, v.content_hash as hash from revision v join joint j on j.id = v.joint_id where v.content_hash >= ? and v.content_hash < ? and j.${on} limit ?`, [...range, ...ids, most]))
      finds.push({ name: short(v.hash), note: `revision r${v.number} of ${v.joint}, ${machineOf(v.machine).name}`, at: { page: 'joint', machine: machineOf(v.machine).key, joint: v.key } })
  }
  if (readsSomething)
    for (const f of await ask<{ line: string; version: string; schema: string; image: string | null }>(em, 'select l.key as line, v.version, v.schema_hash as `schema`, v.image_sha256 as image from firmware_version v join firmware_line l on l.id = v.line_id where (v.schema_hash >= ? and v.schema_hash < ?) or (v.image_sha256 >= ? and v.image_sha256 < ?) limit ?', [...range, ...range, most])) {
      const isSchema = f.schema.startsWith(prefix)
      finds.push({ name: short(isSchema ? f.schema : f.image!), note: `${isSchema ? 'schema' : 'firmware image'} of ${f.line} ${f.version}`, at: { page: 'firmware', line: f.line, version: f.version } })
    }
  if (readsSomething)
    for (const e of await em.find(LedgerEntry, { $and: [{ hash: { $gte: range[0], $lt: range[1] } }, readable(held)] }, { limit: most }))
      finds.push({ name: short(e.hash), note: `ledger entry ${e.sequence}, ${e.act}, ${e.personName}`, at: { page: 'ledger', entry: e.sequence } })
  return finds
}
