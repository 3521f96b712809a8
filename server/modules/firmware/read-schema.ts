import { placeOf, readText } from '../../../shared/parameters/set-text.ts'
import { expectParameterSchema, readParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import { DomainError } from '../../http/errors.ts'
import { firmwareName, type FirmwareVersion } from './firmware-version.entity.ts'
import { hashOf, knownSchema, type KnownSchema } from './schema-cache.ts'

interface Place {
  line: number
  column: number
  pointer: string
  message: string
}

function refuse(problems: readonly Place[]): never {
  throw new DomainError('content-invalid', `The parameter schema can't be used: ${problems.length === 1 ? 'one place' : `${problems.length} places`} to correct. Nothing was saved; what you typed is still with you.`, {
    fields: problems.map((p) => ({ pointer: p.pointer, detail: `line ${p.line}, column ${p.column}: ${p.message}` })),
    extra: { problems },
  })
}

/**
 * Reads the text of a parameter schema and checks it against Detent's meta-schema.
 *
 * @throws DomainError content-invalid with line, column and pointer of each problem; the pointers lead into the schema
 */
export function readSchema(text: string): KnownSchema {
  const read = readText(text)
  if (!read.ok) return refuse(read.problems)
  const reading = readParameterSchema(read.document)
  if (reading.kind === 'schema') return { document: read.document, hash: hashOf(read.document), schema: reading.schema }
  const offsetOf = (pointer: string): number => read.pointerOffsets.get(pointer) ?? (pointer === '' ? 0 : offsetOf(pointer.slice(0, pointer.lastIndexOf('/'))))
  return refuse(reading.problems.map((p) => ({ ...placeOf(text, offsetOf(p.pointer)), pointer: p.pointer, message: p.message })))
}

/**
 * The schema of a stored version, which was found good when it was saved.
 *
 * @throws Error when it can't be read any more, or is not the one its hash names: the program or the database was altered
 */
export const schemaOf = (version: FirmwareVersion): KnownSchema =>
  knownSchema(version.schemaHash, () => {
    const read = readText(version.schemaText)
    if (!read.ok) throw new Error(`the stored schema of ${firmwareName(version)} is no JSON`)
    const known = { document: read.document, hash: hashOf(read.document), schema: expectParameterSchema(read.document) }
    if (known.hash !== version.schemaHash) throw new Error(`the stored schema of ${firmwareName(version)} is not the one that its hash names`)
    return known
  })
