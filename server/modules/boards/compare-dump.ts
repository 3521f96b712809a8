import type { EntityManager } from '@mikro-orm/core'
import { largestDumpBytes, type Dump, type ReadBackResult, type RegisterDifference } from '../../../shared/contract/boards.ts'
import type { ParameterSchema, ParameterValue } from '../../../shared/registers/parameter-schema.ts'
import { compareReadBack, type DumpImage, type ReadBack, type WordDifference } from '../../../shared/registers/read-back.ts'
import { formatOfName, readDump } from '../../exports/read-dump.ts'
import { DomainError } from '../../http/errors.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { versionsNamed } from '../firmware/firmware-authors.ts'
import { schemaOf } from '../firmware/read-schema.ts'
import type { Joint } from '../machines/joint.entity.ts'
import { ReleaseJoint } from '../releases/release-joint.entity.ts'
import { Release } from '../releases/release.entity.ts'
import { shortValue } from './short-value.ts'

export interface ComparedDump {
  release: Release
  joint: Joint
  /** against `release` */
  result: ReadBackResult
  /** the release whose image the bytes equal, this or another; null for none */
  equal: { release: Release; firmware: string; result: ReadBackResult } | null
  /** the file as uploaded */
  bytes: Uint8Array
}

const refuse = (pointer: string, detail: string, extra: Record<string, unknown> = {}): never => {
  throw new DomainError('content-invalid', `The dump can't be read: ${detail} Nothing was recorded; read the board back again, or choose the right file.`, { fields: [{ pointer, detail }], extra })
}

function bytesOf(dump: Dump, pointer: string): Uint8Array {
  if (dump.content.length % 4 !== 0) refuse(`${pointer}/content`, 'The file did not arrive whole (its base64 is cut off).')
  const bytes = new Uint8Array(Buffer.from(dump.content, 'base64'))
  if (bytes.length > largestDumpBytes) throw new DomainError('body-too-large', `The dump has ${bytes.length} bytes; at most ${largestDumpBytes} are read. Nothing was recorded.`, { fields: [{ pointer: `${pointer}/content`, detail: `has more than ${largestDumpBytes} bytes` }] })
  return bytes
}

const hex = (bytes: Uint8Array) => Buffer.from(bytes).toString('hex').toUpperCase().replace(/..(?=.)/g, '$& ')

const presentDifference = (schema: ParameterSchema, d: WordDifference): RegisterDifference => ({
  kind: d.kind,
  address: d.address,
  found: hex(d.found),
  expected: hex(d.expected),
  values: d.parameters.map((p) => {
    const short = (value: ParameterValue | undefined) => (value === undefined ? null : shortValue(schema.byName.get(p.parameter)!, value))
    return { parameter: p.parameter, title: p.title, unit: p.unit ?? '', found: short(p.found), expected: short(p.expected) }
  }),
})

/** Bytes that took part in the comparison: read, and not of a register that only the board or only the bench writes. */
function comparedBytes(schema: ParameterSchema, dump: DumpImage): number {
  const counts = dump.present.slice()
  for (const w of schema.words) if (w.access !== 'rw') counts.fill(0, w.address - schema.image.base, w.address - schema.image.base + w.bytes)
  return counts.reduce((sum, one) => sum + one, 0)
}

/** @throws DomainError not-found, or unexpected when the release's firmware is gone */
async function imageIn(em: EntityManager, release: Release, joint: Joint) {
  const row = await em.findOne(ReleaseJoint, { release, joint }, { populate: ['image', 'revision'] })
  if (!row) throw new DomainError('invalid-request', `Release ${release.version} has no joint "${joint.key}". Nothing was recorded.`, { fields: [{ pointer: '/joint', detail: `is not in ${release.version}` }] })
  const { firmware } = row.revision.content
  const [version] = await versionsNamed(em, [firmware])
  return { image: new Uint8Array(row.image), firmware, revision: row.revision.number, schema: schemaOf(version).schema }
}

/** Another release of the joint with this sequence number in its image, or any when the map holds none; newest first. */
async function others(em: EntityManager, release: Release, sequence: number | null): Promise<Release[]> {
  const where = sequence === null ? {} : { sequence }
  return (await em.find(Release, { machine: release.machine, id: { $ne: release.id }, ...where }, { orderBy: { sequence: 'desc' }, limit: 50, populate: ['machine'] })) as Release[]
}

/**
 * Reads an uploaded dump and compares it with a release's image for a joint, register by register.
 *
 * @param pointer  of the dump in the request's body
 * @throws DomainError content-invalid naming line, byte or the registers left out; body-too-large
 */
export async function compareDump(em: EntityManager, { release, joint, dump, pointer }: { release: Release; joint: Joint; dump: Dump; pointer: string }): Promise<ComparedDump> {
  const bytes = bytesOf(dump, pointer)
  const format = formatOfName(dump.fileName) ?? refuse(`${pointer}/fileName`, 'The name of the file must end in .bin, .hex, .srec or .csv, which says how to read it.')
  const here = await imageIn(em, release, joint)
  const read = readDump(format, bytes, here.schema)
  if (read.kind === 'refused') {
    const { kind: _kind, message, ...place } = read
    return refuse(`${pointer}/content`, message, place)
  }
  const against = (what: typeof here, of: Release): ReadBackResult => {
    const found: ReadBack = compareReadBack(what.schema, read, what.image)
    if (found.kind === 'incomplete') return refuse(`${pointer}/content`, found.message, { missing: found.missing.map((m) => m.address) })
    return {
      verdict: found.kind, release: of.version, joint: joint.key, revision: what.revision, fileName: dump.fileName, format, sha256: sha256(bytes),
      comparedBytes: comparedBytes(what.schema, read), imageBytes: what.image.length, differences: found.differences.map((d) => presentDifference(what.schema, d)),
      unexplained: found.unexplained.map((u) => ({ address: u.address, bytes: hex(u.bytes) })), findings: found.findings.map((f) => f.message), sequence: found.release,
    }
  }
  const result = against(here, release)
  if (result.verdict === 'equal') return { release, joint, result, bytes, equal: { release, firmware: here.firmware, result } }
  for (const other of await others(em, release, result.sequence)) {
    if (!Object.hasOwn(other.set.joints, joint.key)) continue
    const there = await imageIn(em, other, joint)
    if (there.image.length !== here.image.length) continue
    const found = against(there, other)
    if (found.verdict === 'equal') return { release, joint, result, bytes, equal: { release: other, firmware: there.firmware, result: found } }
  }
  return { release, joint, result, bytes, equal: null }
}
