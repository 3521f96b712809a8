import { dirname, join } from 'node:path'
import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import { checkParameterSchemaText } from '../../shared/registers/check-parameter-schema.ts'
import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import { readSet } from '../modules/changes/read-set.ts'
import { readBytes } from './read-bytes.ts'

const largest = 16 * 1024 * 1024

/** Reads a text file of bounded size; a byte order mark is passed over. @throws Error saying what is wrong with it */
export function readTextFile(file: string): string {
  const bytes = readBytes(file, largest)
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes)
  } catch {
    throw new Error(`${file}: byte ${firstNoText(bytes)} is no text in UTF-8.`)
  }
}

/** Offset of the first byte that is no UTF-8: where the text written again has other bytes. */
function firstNoText(bytes: Uint8Array): number {
  const again = new TextEncoder().encode(new TextDecoder('utf-8', { ignoreBOM: true }).decode(bytes))
  return bytes.findIndex((byte, k) => again[k] !== byte)
}

export interface SchemaFile {
  document: unknown
  schema: ParameterSchema
}

/**
 * Reads a parameter schema without losing a digit.
 *
 * @throws Error with every problem, each with its place
 */
export function readSchemaFile(path: string): SchemaFile {
  const check = checkParameterSchemaText(readTextFile(path))
  if (check.kind === 'refused') throw new Error(check.problems.map((p) => `${path}:${p.line ?? 1}:${p.column ?? 1}: ${p.pointer ? `${p.pointer} ` : ''}${p.message}`).join('\n'))
  return { document: check.json, schema: check.schema }
}

export interface SetFile {
  set: MachineSet
  /** by firmware name */
  schemas: Map<string, ParameterSchema>
  documents: Record<string, unknown>
}

/**
 * Reads a machine set and the parameter schemas it names: LINE-VERSION.schema.json in the folder given, else in "firmware" beside the file.
 *
 * @throws Error with every problem, each with its line
 */
export function readSetFile(file: string, schemasDir: string | undefined): SetFile {
  const read = readSet(readTextFile(file))
  if (!read.ok) throw new Error(read.problems.map((p) => `${file}:${p.line}:${p.column}: ${p.pointer ? `${p.pointer} ` : ''}${p.message}`).join('\n'))
  const folder = schemasDir ?? join(dirname(file), 'firmware')
  const schemas = new Map<string, ParameterSchema>()
  const documents: Record<string, unknown> = {}
  for (const name of new Set(Object.values(read.set.joints).map((j) => j.firmware))) {
    const path = join(folder, `${name.replace(' ', '-')}.schema.json`)
    const { document, schema } = readSchemaFile(path)
    schemas.set(name, schema)
    documents[name] = document
  }
  return { set: read.set, schemas, documents }
}
