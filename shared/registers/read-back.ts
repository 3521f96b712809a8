import { decodeField, decodeImage, type DecodedImage, type ImageFinding } from './decode-image.ts'
import type { ParameterSchema, ParameterValue, ParameterValues, Word, WordKind } from './parameter-schema.ts'
import { spanText } from './register-map.ts'
import { readWord, wordToRaw } from './word-bytes.ts'

/** Bytes of a board as read: `present` is 1 where a byte was read, 0 where the dump leaves it out. */
export interface DumpImage {
  readonly kind: 'dump'
  readonly image: Uint8Array
  readonly present: Uint8Array
}

/** A word whose bytes differ. */
export interface WordDifference {
  readonly kind: WordKind
  readonly address: number
  readonly found: Uint8Array
  readonly expected: Uint8Array
  /** The parameters of the word that differ, in units; empty for the image's own registers and for reserved bits. */
  readonly parameters: readonly {
    readonly parameter: string
    readonly title: string
    readonly unit: string | null
    /** Undefined when the bytes hold no value. */
    readonly found: ParameterValue | undefined
    readonly expected: ParameterValue | undefined
  }[]
}

export interface UnexplainedBytes {
  readonly address: number
  readonly bytes: Uint8Array
}

export type ReadBack =
  | {
      readonly kind: 'equal' | 'differs'
      readonly differences: readonly WordDifference[]
      /** Bytes that belong to no register and are not the fill. */
      readonly unexplained: readonly UnexplainedBytes[]
      readonly values: ParameterValues
      readonly telemetry: ParameterValues
      readonly release: number | null
      readonly findings: readonly ImageFinding[]
    }
  | { readonly kind: 'incomplete'; readonly message: string; readonly missing: readonly { readonly address: number; readonly bytes: number; readonly parameters: readonly string[] }[] }

/**
 * A dump against the image a board should hold, register by register.
 *
 * `wo` registers are not compared, `ro` ones are decoded and not compared. A dump that leaves out a compared register is
 * incomplete: it proves nothing.
 *
 * @param expected  image of a revision or release under the same schema
 */
export function compareReadBack(schema: ParameterSchema, dump: DumpImage, expected: Uint8Array): ReadBack {
  const compared = schema.words.filter((word) => word.access === 'rw')
  const missing = compared.filter((word) => !isPresent(schema, dump, word))
  if (missing.length > 0) return incomplete(missing)
  const decoded = decodeImage(schema, filled(schema, dump))
  const differences = compared.flatMap((word) => differenceOf(schema, word, dump.image, expected) ?? [])
  return {
    kind: differences.length === 0 ? 'equal' : 'differs',
    differences,
    unexplained: unexplainedBytes(schema, dump),
    values: decoded.values,
    telemetry: presentTelemetry(schema, dump, decoded),
    release: decoded.release,
    findings: decoded.findings,
  }
}

/** A dump alone: what the board would use, and what in it makes no sense. */
export function decodeDump(schema: ParameterSchema, dump: DumpImage): ReadBack {
  return compareReadBack(schema, dump, dump.image)
}

function incomplete(missing: readonly Word[]): ReadBack {
  const list = missing.map((word) => ({ address: word.address, bytes: word.bytes, parameters: word.parameters.map((p) => p.name) }))
  const [first] = missing
  const name = first.parameters.map((p) => p.title).join(', ') || first.kind
  const more = missing.length > 1 ? ` and ${missing.length - 1} more` : ''
  return { kind: 'incomplete', missing: list, message: `The dump leaves out ${spanText(first.address, first.bytes)} (${name})${more}. Read the whole image back.` }
}

const isPresent = (schema: ParameterSchema, dump: DumpImage, word: Word): boolean => {
  const at = word.address - schema.image.base
  return dump.present.subarray(at, at + word.bytes).every((byte) => byte === 1)
}

/** The dump with fill where nothing was read, so that a checksum over gaps that were left out still computes. */
const filled = (schema: ParameterSchema, dump: DumpImage): Uint8Array =>
  dump.image.map((byte, k) => (dump.present[k] === 1 ? byte : schema.image.fill))

function presentTelemetry(schema: ParameterSchema, dump: DumpImage, decoded: DecodedImage): ParameterValues {
  const telemetry: Record<string, ParameterValue> = {}
  for (const word of schema.words) {
    if (word.access !== 'ro' || !isPresent(schema, dump, word)) continue
    for (const { name } of word.parameters) if (Object.hasOwn(decoded.telemetry, name)) telemetry[name] = decoded.telemetry[name]
  }
  return telemetry
}

function differenceOf(schema: ParameterSchema, word: Word, image: Uint8Array, expected: Uint8Array): WordDifference | null {
  const at = word.address - schema.image.base
  const found = image.slice(at, at + word.bytes)
  const wanted = expected.slice(at, at + word.bytes)
  if (found.every((byte, k) => byte === wanted[k])) return null
  const parameters = word.parameters
    .map((parameter) => ({
      parameter: parameter.name, title: parameter.title, unit: parameter.unit,
      found: valueIn(word, parameter, found), expected: valueIn(word, parameter, wanted),
    }))
    .filter((p) => word.parameters.length === 1 || p.found !== p.expected)
  return { kind: word.kind, address: word.address, found, expected: wanted, parameters }
}

function valueIn(word: Word, parameter: Word['parameters'][number], bytes: Uint8Array): ParameterValue | undefined {
  const content = readWord(bytes, 0, word.bytes, word.byteOrder)
  const { bits, signed, kind } = word.encoding
  return decodeField(parameter, content, wordToRaw(content, bits, signed && kind !== 'float')).value
}

function unexplainedBytes(schema: ParameterSchema, dump: DumpImage): UnexplainedBytes[] {
  const { base, length, fill } = schema.image
  const owned = new Uint8Array(length)
  for (const word of schema.words) owned.fill(1, word.address - base, word.address - base + word.bytes)
  const strange = (k: number): boolean => k < length && owned[k] === 0 && dump.present[k] === 1 && dump.image[k] !== fill
  const list: UnexplainedBytes[] = []
  for (let k = 0; k < length; k += 1) {
    if (!strange(k)) continue
    const start = k
    while (strange(k)) k += 1
    list.push({ address: base + start, bytes: dump.image.slice(start, k) })
  }
  return list
}
