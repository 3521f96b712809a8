import { checkParameterSchemaText } from '../../../shared/registers/check-parameter-schema.ts'
import { readJsonText } from '../../../shared/registers/json-text.ts'
import type { SchemaProblem } from '../../../shared/registers/parameter-schema.ts'
import { expectParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import { DomainError } from '../../http/errors.ts'
import { firmwareName, type FirmwareVersion } from './firmware-version.entity.ts'
import { hashOf, knownSchema, type KnownSchema } from './schema-cache.ts'

function refuse(problems: readonly SchemaProblem[]): never {
  throw new DomainError('content-invalid', `The parameter schema can't be used: ${problems.length === 1 ? 'one place' : `${problems.length} places`} to correct. Nothing was saved; what you typed is still with you.`, {
    fields: problems.map((p) => ({ pointer: p.pointer, detail: `line ${p.line ?? 1}, column ${p.column ?? 1}: ${p.message}` })),
    extra: { problems },
  })
}

/** Control characters but tab and line ends, and halves of a surrogate pair: a database or a file would not give them back as they were. */
const unkept = /[\x00-\x08\x0b\x0c\x0e-\x1f\x7f]|[\ud800-\udbff](?![\udc00-\udfff])|(?<![\ud800-\udbff])[\udc00-\udfff]/

/**
 * Reads the text of a parameter schema and checks it against Detent's meta-schema.
 *
 * @throws DomainError content-invalid with line, column and pointer of each problem; the pointers lead into the schema
 */
export function readSchema(text: string): KnownSchema {
  const at = text.search(unkept)
  if (at >= 0) {
    const lines = text.slice(0, at).split('\n')
    refuse([{ pointer: '', code: 'bad-character', message: 'A character stands here that text can\'t keep; take it out.', line: lines.length, column: lines[lines.length - 1].length + 1 }])
  }
  const check = checkParameterSchemaText(text)
  return check.kind === 'schema' ? { document: check.json, hash: hashOf(check.json), schema: check.schema } : refuse(check.problems)
}

/**
 * The schema of a stored version, which was found good when it was saved.
 *
 * @throws Error when it can't be read any more, or is not the one its hash names: the program or the database was altered
 */
export const schemaOf = (version: FirmwareVersion): KnownSchema =>
  knownSchema(version.schemaHash, () => {
    const read = readJsonText(version.schemaText)
    if (read.kind === 'refused') throw new Error(`the stored schema of ${firmwareName(version)} is no JSON`)
    const known = { document: read.value, hash: hashOf(read.value), schema: expectParameterSchema(read.value) }
    if (known.hash !== version.schemaHash) throw new Error(`the stored schema of ${firmwareName(version)} is not the one that its hash names`)
    return known
  })
