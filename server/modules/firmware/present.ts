import type { EntityManager } from '@mikro-orm/core'
import semver from 'semver'
import type { FirmwareLineView, FirmwareParameter, FirmwareVersionSummary, FirmwareVersionView } from '../../../shared/contract/firmware.ts'
import type { Allowed } from '../../../shared/contract/people.ts'
import type { Bound, Parameter } from '../../../shared/registers/parameter-schema.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { Person } from '../people/person.entity.ts'
import type { FirmwareLine } from './firmware-line.entity.ts'
import { FirmwareVersion, imageOf } from './firmware-version.entity.ts'
import { schemaOf } from './read-schema.ts'

const numberOf = (...bounds: (Bound | null)[]): number | null => {
  const bound = bounds.find((b) => b !== null)
  return bound ? Number(bound.text) : null
}

/** A parameter's lowest and highest value as its schema states them, exclusive bounds included; null where it states none. */
export const limitsOf = (p: Parameter) => ({
  minimum: numberOf(p.bounds.minimum, p.bounds.exclusiveMinimum),
  maximum: numberOf(p.bounds.maximum, p.bounds.exclusiveMaximum),
})

const presentParameter = (p: Parameter): FirmwareParameter => ({
  name: p.name,
  title: p.title,
  unit: p.unit ?? '',
  kind: p.kind,
  role: p.role,
  boardBound: p.boardBound,
  default: p.default,
  ...limitsOf(p),
  choices: p.choices ? [...p.choices] : null,
  register: p.register && { address: p.register.address, bytes: p.register.bytes, encoding: p.register.encoding.name, access: p.register.access, bit: p.register.bit, width: p.register.width },
})

const byAddress = (a: FirmwareParameter, b: FirmwareParameter) =>
  (a.register?.address ?? Infinity) - (b.register?.address ?? Infinity) || (a.register?.bit ?? 0) - (b.register?.bit ?? 0) || 0

function presentSummary(version: FirmwareVersion): FirmwareVersionSummary {
  const { schema } = schemaOf(version)
  return {
    line: version.line.key,
    version: version.version,
    state: version.state,
    schemaHash: version.schemaHash,
    uploadedBy: version.uploadedBy.name,
    publishedBy: version.publishedBy?.name ?? null,
    publishedAt: version.publishedAt?.toISOString() ?? null,
    parameters: schema.parameters.length,
    imageBytes: schema.image.length,
    firmwareImage: imageOf(version),
  }
}

function presentLine(line: FirmwareLine, versions: readonly FirmwareVersion[], held: readonly HeldRole[]): FirmwareLineView {
  const drafting = may(held, 'draft firmware', null)
  return {
    key: line.key,
    name: line.name,
    description: line.description,
    versions: [...versions].sort((a, b) => semver.rcompare(a.version, b.version)).map(presentSummary),
    may: { draftVersion: drafting, describe: drafting },
  }
}

/** Firmware lines with their versions, by name. */
export async function presentLines(em: EntityManager, lines: readonly FirmwareLine[], held: readonly HeldRole[]): Promise<FirmwareLineView[]> {
  const versions = await em.find(FirmwareVersion, { line: { $in: lines.map((l) => l.id) } }, { populate: ['line', 'uploadedBy', 'publishedBy'] })
  return [...lines].sort((a, b) => a.name.localeCompare(b.name, 'en')).map((line) => presentLine(line, versions.filter((v) => v.line.id === line.id), held))
}

/** Firmware belongs to no machine: whoever downloads for one machine may fetch it. */
export const mayDownloadImage = (held: readonly HeldRole[]): Allowed => {
  const answers = [...new Set(held.map((h) => h.machine))].map((machine) => may(held, 'download', machine))
  return answers.find((a) => a.allowed) ?? may([], 'download', null)
}

/** "Not in this state" is told before "not your role", so that nobody asks for a role in vain. */
function mayAct(version: FirmwareVersion, held: readonly HeldRole[], person: Person, act: 'published' | 'retired'): Allowed {
  const from = act === 'published' ? 'draft' : 'published'
  if (version.state !== from) return { allowed: false, why: `It is ${version.state}.` }
  const right = may(held, 'publish firmware', null)
  if (!right.allowed) return right
  return version.writers.includes(person.id) ? { allowed: false, why: 'You wrote in it; another release manager does this.' } : right
}

/** One version in full. */
export async function presentVersion(em: EntityManager, version: FirmwareVersion, held: readonly HeldRole[], person: Person): Promise<FirmwareVersionView> {
  const { schema } = schemaOf(version)
  const names = new Map((await em.find(Person, { id: { $in: version.writers } })).map((p) => [p.id, p.name]))
  return {
    ...presentSummary(version),
    lineName: version.line.name,
    schemaText: version.schemaText,
    notes: version.notes,
    revision: version.revision,
    writers: version.writers.map((id) => names.get(id) ?? `person ${id}`),
    createdAt: version.createdAt.toISOString(),
    retiredBy: version.retiredBy?.name ?? null,
    retiredAt: version.retiredAt?.toISOString() ?? null,
    parameterList: schema.parameters.map(presentParameter).sort(byAddress),
    image: { base: schema.image.base, length: schema.image.length, addressWidth: schema.image.addressWidth },
    advice: schema.advice.map(({ pointer, message }) => ({ pointer, message })),
    may: {
      edit: version.state === 'draft' ? may(held, 'draft firmware', null) : { allowed: false, why: `It is ${version.state}; draft a new version instead.` },
      publish: mayAct(version, held, person, 'published'),
      retire: mayAct(version, held, person, 'retired'),
      downloadImage: version.imageSha256 ? mayDownloadImage(held) : { allowed: false, why: 'No firmware image was attached.' },
    },
  }
}
