import { same } from '../../../shared/parameters/edits.ts'
import { decodeImage } from '../../../shared/registers/decode-image.ts'
import { encodeImage } from '../../../shared/registers/encode-image.ts'
import { expectParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import type { Value } from '../../../shared/parameters/machine-set.ts'

/** What a second reading of the bytes finds other than the values they were made from; empty when the bytes hold. */
export function differencesFound(document: unknown, image: Uint8Array, values: Record<string, Value>, sequence: number): string[] {
  const schema = expectParameterSchema(document)
  const decoded = decodeImage(schema, image)
  const encoded = encodeImage(schema, values, { release: sequence })
  if (encoded.kind === 'refused') return encoded.problems.map((p) => p.message)
  return [...decoded.findings.map((f) => f.message), ...Object.keys(decoded.values).filter((name) => !same(decoded.values[name], encoded.decoded[name])).map((name) => `${name} reads ${String(decoded.values[name])}.`)]
}
