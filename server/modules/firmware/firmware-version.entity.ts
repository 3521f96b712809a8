import { defineEntity, p, type InferEntity } from '@mikro-orm/core'
import { Person } from '../people/person.entity.ts'
import { DomainError } from '../../http/errors.ts'
import { FirmwareLine } from './firmware-line.entity.ts'

export type FirmwareState = 'draft' | 'published' | 'retired'
export type FirmwareImageFormat = 'bin' | 'hex'

/** A version of a firmware line with its parameter schema. Editable as a draft, immutable once published. */
export const FirmwareVersion = defineEntity({
  name: 'FirmwareVersion',
  uniques: [{ properties: ['line', 'version'] }],
  properties: {
    id: p.integer().primary(),
    line: () => p.manyToOne(FirmwareLine),
    version: p.string().length(40),
    state: p.string().$type<FirmwareState>(),
    /** the parameter schema as its author wrote it */
    schemaText: p.text(),
    /** SHA-256 of the schema's RFC 8785 form */
    schemaHash: p.string().length(64),
    notes: p.text(),
    /** the firmware itself, where it was given: its SHA-256 names it in the file store */
    imageSha256: p.string().length(64).nullable(),
    imageBytes: p.integer().nullable(),
    imageFormat: p.string().$type<FirmwareImageFormat>().nullable(),
    /** as its uploader called it */
    imageName: p.string().length(120).nullable(),
    uploadedBy: () => p.manyToOne(Person),
    /** everybody who wrote in it, the uploader first: none of them publishes or retires it */
    writers: p.json<number[]>(),
    createdAt: p.datetime(),
    publishedBy: () => p.manyToOne(Person).nullable(),
    publishedAt: p.datetime().nullable(),
    retiredBy: () => p.manyToOne(Person).nullable(),
    retiredAt: p.datetime().nullable(),
    /** counts saves: the ETag of a draft */
    revision: p.integer().default(1),
  },
})
export type FirmwareVersion = InferEntity<typeof FirmwareVersion>

/** The name that joints give it by, such as "hinge 2.1.0". */
export const firmwareName = (v: FirmwareVersion) => `${v.line.key} ${v.version}`

const refuse = (v: FirmwareVersion, act: string): never => {
  throw new DomainError('wrong-state', `${firmwareName(v)} is ${v.state}; it can't be ${act}. Nothing was altered.`)
}

export function editSchema(v: FirmwareVersion, edit: { schemaText: string; schemaHash: string; notes: string }, by: Person) {
  if (v.state !== 'draft') refuse(v, 'edited; draft a new version instead')
  Object.assign(v, { schemaText: edit.schemaText, schemaHash: edit.schemaHash, notes: edit.notes })
  if (!v.writers.includes(by.id)) v.writers = [...v.writers, by.id]
  v.revision += 1
}

export interface FirmwareImage {
  sha256: string
  bytes: number
  format: FirmwareImageFormat
  name: string
}

/** The firmware image that belongs to the version; null where none was given. */
export const imageOf = (v: FirmwareVersion): FirmwareImage | null =>
  v.imageSha256 ? { sha256: v.imageSha256, bytes: v.imageBytes!, format: v.imageFormat!, name: v.imageName! } : null

/** Gives a draft its firmware image, or takes it away. @throws DomainError wrong-state */
export function attachImage(v: FirmwareVersion, image: FirmwareImage | null, by: Person) {
  if (v.state !== 'draft') refuse(v, 'given another firmware image; draft a new version instead')
  Object.assign(v, { imageSha256: image?.sha256 ?? null, imageBytes: image?.bytes ?? null, imageFormat: image?.format ?? null, imageName: image?.name ?? null })
  if (!v.writers.includes(by.id)) v.writers = [...v.writers, by.id]
  v.revision += 1
}

/** @throws DomainError own-work, wrong-state */
export function publish(v: FirmwareVersion, by: Person, at: Date) {
  mustBeOthers(v, by, 'publishes')
  if (v.state !== 'draft') refuse(v, 'published')
  Object.assign(v, { state: 'published', publishedBy: by, publishedAt: at })
  v.revision += 1
}

/** @throws DomainError own-work, wrong-state */
export function retire(v: FirmwareVersion, by: Person, at: Date) {
  mustBeOthers(v, by, 'retires')
  if (v.state !== 'published') refuse(v, 'retired')
  Object.assign(v, { state: 'retired', retiredBy: by, retiredAt: at })
  v.revision += 1
}

function mustBeOthers(v: FirmwareVersion, by: Person, act: 'publishes' | 'retires') {
  if (v.writers.includes(by.id))
    throw new DomainError('own-work', `You wrote in ${firmwareName(v)}; another release manager ${act} it. Nothing was altered.`, { recorded: true })
}
