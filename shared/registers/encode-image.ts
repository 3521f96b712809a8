import { checksumOf } from './checksum.ts'
import { rawRange, roundingError, toPhysical } from './encoding.ts'
import type { Access, Parameter, ParameterSchema, ParameterValue, ParameterValues, Word, WordKind } from './parameter-schema.ts'
import { findValueProblems } from './find-value-problems.ts'
import type { Rational } from './rational.ts'
import { effectiveValue, readValue, type ValueProblem } from './value-check.ts'
import { rawToWord, wordBytes } from './word-bytes.ts'

/** One parameter in its register. */
export interface RegisterRow {
  readonly parameter: string
  readonly title: string
  readonly unit: string | null
  readonly access: Access
  readonly address: number
  /** The whole word as it lies in memory. */
  readonly bytes: Uint8Array
  readonly encoding: string
  readonly bit: number | null
  readonly width: number | null
  /** As the encoding reads it: signed for i and q, the bit pattern for f32, the field's own bits for a field. */
  readonly raw: number
  readonly typed: ParameterValue
  /** What the board will see. */
  readonly physical: ParameterValue
  /** In the value's unit. */
  readonly errorAbsolute: number
  /** Relative to the typed value; null when that is 0 and the error is not. */
  readonly errorRelative: number | null
}

/** One addressable word with its bytes. */
export interface EncodedWord {
  readonly kind: WordKind
  readonly address: number
  readonly bytes: Uint8Array
  /** Unsigned value of the bytes. */
  readonly word: number
  /** `wo` words are in the write list only; `ro` words are not here. */
  readonly access: 'rw' | 'wo'
  readonly parameters: readonly string[]
}

export interface EncodedImage {
  readonly kind: 'image'
  /** Byte 0 is register address `base`. */
  readonly image: Uint8Array
  readonly rows: readonly RegisterRow[]
  readonly words: readonly EncodedWord[]
  /** Null when the map has none. */
  readonly checksum: number | null
  /** Every parameter but the read-only ones, as the board will see it: what analyses must use. */
  readonly decoded: ParameterValues
}

export type EncodeResult = EncodedImage | { readonly kind: 'refused'; readonly problems: readonly ValueProblem[] }

/**
 * A parameter set to the bytes of its register image.
 *
 * @param values   by parameter name; missing ones take the schema's default
 * @param release  the release's sequence number; 0 means unreleased
 * @returns        image and rows, or every problem found; nothing is clamped, wrapped or cut silently
 * @source         register-image.md
 */
export function encodeImage(schema: ParameterSchema, values: ParameterValues, { release }: { release: number }): EncodeResult {
  const problems = findValueProblems(schema, values)
  const wrongRelease = releaseProblem(schema, release)
  if (wrongRelease) problems.push(wrongRelease)
  if (problems.length > 0) return { kind: 'refused', problems }

  const { image: layout } = schema
  const readings = readAll(schema, values)
  const image = new Uint8Array(layout.length).fill(layout.fill)
  const rows: RegisterRow[] = []
  const words: EncodedWord[] = []
  for (const word of schema.words) {
    if (word.access === 'ro' || word.kind === 'checksum') continue
    const content = word.kind === 'layout-id' ? layout.layoutId!.value : word.kind === 'release' ? release : fillWord(word, readings)
    const encoded = encodedWord(word, rawToWord(content, word.encoding.bits))
    words.push(encoded)
    if (word.access === 'rw') image.set(encoded.bytes, word.address - layout.base)
    for (const parameter of word.parameters) rows.push(rowOf(parameter, readings.get(parameter.name)!, encoded))
  }
  const checksum = layout.checksum ? imageChecksum(schema, image) : null
  const place = schema.words.find((word) => word.kind === 'checksum')
  if (checksum !== null && place) {
    const encoded = encodedWord(place, checksum)
    words.push(encoded)
    words.sort((a, b) => a.address - b.address)
    image.set(encoded.bytes, place.address - layout.base)
  }
  return { kind: 'image', image, rows, words, checksum, decoded: decodedOf(schema, rows) }
}

function releaseProblem(schema: ParameterSchema, release: number): ValueProblem | null {
  const place = schema.image.release
  const high = place ? rawRange(place.encoding).high : Number.MAX_SAFE_INTEGER
  if (Number.isInteger(release) && release >= 0 && release <= high) return null
  return { pointer: '', parameter: '', code: 'release', message: `The release number ${release} is no whole number from 0 to ${high}, which is what the image's release register holds.` }
}

interface CheckedValue { readonly typed: ParameterValue; readonly exact: Rational | null; readonly raw: number }

/** Every value of a set that was found good, rounded once. */
function readAll(schema: ParameterSchema, values: ParameterValues): Map<string, CheckedValue> {
  const readings = new Map<string, CheckedValue>()
  for (const parameter of schema.parameters) {
    if (!parameter.register || parameter.register.access === 'ro') continue
    const typed = effectiveValue(parameter, values)
    const reading = readValue(parameter, typed)
    if (typed === undefined || reading.kind !== 'value' || reading.raw === null) throw new Error(`${parameter.name} was not checked before it was encoded`)
    readings.set(parameter.name, { typed, exact: reading.exact, raw: reading.raw })
  }
  return readings
}

/** Raw content of a parameter word: one value, or the fields over the reserved bits. */
function fillWord(word: Word, readings: ReadonlyMap<string, CheckedValue>): number {
  const [first] = word.parameters
  if (first.register!.bit === null) return readings.get(first.name)!.raw
  let content = word.reserved
  for (const field of word.parameters) content += readings.get(field.name)!.raw * 2 ** field.register!.bit!
  return content
}

const encodedWord = (word: Word, content: number): EncodedWord => ({
  kind: word.kind, address: word.address, bytes: wordBytes(content, word.bytes, word.byteOrder), word: content,
  access: word.access === 'wo' ? 'wo' : 'rw', parameters: word.parameters.map((p) => p.name),
})

function rowOf(parameter: Parameter, { typed, exact, raw }: CheckedValue, word: EncodedWord): RegisterRow {
  const register = parameter.register!
  const error = exact ? roundingError(register.codec, exact, raw) : { absolute: 0, relative: 0 }
  return {
    parameter: parameter.name, title: parameter.title, unit: parameter.unit, access: register.access, address: register.address,
    bytes: word.bytes, encoding: register.encoding.name, bit: register.bit, width: register.width, raw, typed,
    physical: exact ? toPhysical(register.codec, raw) : memberOf(parameter, typed),
    errorAbsolute: error.absolute, errorRelative: error.relative,
  }
}

/** The enum's own member where a number was given as text. */
const memberOf = (parameter: Parameter, typed: ParameterValue): ParameterValue =>
  parameter.choices?.find((choice) => String(choice) === String(typed)) ?? typed

function decodedOf(schema: ParameterSchema, rows: readonly RegisterRow[]): ParameterValues {
  const decoded: Record<string, ParameterValue> = {}
  for (const row of rows) decoded[row.parameter] = row.physical
  for (const parameter of schema.parameters) if (!parameter.register && parameter.default !== null) decoded[parameter.name] = parameter.default
  return decoded
}

/** Checksum of an image as its schema defines it: `from` to `to`, fill included, the checksum's own bytes left out. */
export function imageChecksum(schema: ParameterSchema, image: Uint8Array): number | null {
  const { checksum, base } = schema.image
  if (!checksum) return null
  const bytes: number[] = []
  for (let address = checksum.from; address <= checksum.to; address += 1) {
    if (address < checksum.address || address >= checksum.address + checksum.bytes) bytes.push(image[address - base])
  }
  return checksumOf(checksum.algorithm, bytes)
}
