import { exactPhysical, toPhysical } from './encoding.ts'
import { imageChecksum } from './encode-image.ts'
import type { Parameter, ParameterSchema, ParameterValue, ParameterValues, Word } from './parameter-schema.ts'
import { spanText } from './register-map.ts'
import { problemOfValue } from './value-check.ts'
import { readWord, wordToRaw } from './word-bytes.ts'

/** Something in a read image that a set cannot say. */
export interface ImageFinding {
  readonly code: 'not-a-number' | 'negative-zero' | 'unlisted-value' | 'reserved-bits' | 'outside-schema' | 'checksum' | 'layout-id'
  /** Empty for the image's own registers. */
  readonly parameter: string
  readonly address: number
  readonly message: string
}

export interface DecodedImage {
  /** Values of the `rw` registers; a register that holds no value is left out and told in the findings. */
  readonly values: ParameterValues
  /** Values of the `ro` registers, as far as the bytes make sense. */
  readonly telemetry: ParameterValues
  /** Sequence number of the release, 0 for unreleased; null when the map has no place for it. */
  readonly release: number | null
  readonly layoutId: { readonly expected: number; readonly found: number } | null
  readonly checksum: { readonly computed: number; readonly found: number } | null
  readonly findings: readonly ImageFinding[]
}

/**
 * The bytes of a register image to the values a board holding them would use.
 *
 * @param image  exactly as long as the schema's image; byte 0 is register address `base`
 * @throws       RangeError when the length differs
 */
export function decodeImage(schema: ParameterSchema, image: Uint8Array): DecodedImage {
  const { length, base } = schema.image
  if (image.length !== length) throw new RangeError(`The image has ${image.length} bytes; its schema says ${length}.`)
  const values: Record<string, ParameterValue> = {}
  const telemetry: Record<string, ParameterValue> = {}
  const findings: ImageFinding[] = []
  let release: number | null = null
  let layoutId: DecodedImage['layoutId'] = null
  let checksum: DecodedImage['checksum'] = null
  for (const word of schema.words) {
    if (word.access === 'wo') continue
    const content = readWord(image, word.address - base, word.bytes, word.byteOrder)
    const raw = wordToRaw(content, word.encoding.bits, word.encoding.signed && word.encoding.kind !== 'float')
    if (word.kind === 'release') release = raw
    else if (word.kind === 'layout-id') {
      layoutId = { expected: schema.image.layoutId!.value, found: raw }
      if (raw !== layoutId.expected) findings.push(finding('layout-id', '', word.address, `The layout id is ${raw}, not ${layoutId.expected}: these bytes belong to another register layout.`))
    } else if (word.kind === 'checksum') {
      checksum = { computed: imageChecksum(schema, image)!, found: content }
      if (checksum.computed !== content) findings.push(finding('checksum', '', word.address, `The checksum is ${hex(content, word.bytes)}, but the bytes give ${hex(checksum.computed, word.bytes)}.`))
    } else {
      const into = word.access === 'ro' ? telemetry : values
      for (const parameter of word.parameters) {
        const reading = decodeField(parameter, content, raw)
        if (reading.value !== undefined) into[parameter.name] = reading.value
        if (word.access === 'rw') findings.push(...reading.findings)
      }
      if (word.access === 'rw') findings.push(...reservedFindings(word, content))
    }
  }
  return { values, telemetry, release, layoutId, checksum, findings }
}

const finding = (code: ImageFinding['code'], parameter: string, address: number, message: string): ImageFinding =>
  ({ code, parameter, address, message })

const hex = (word: number, bytes: number): string => `0x${word.toString(16).toUpperCase().padStart(bytes * 2, '0')}`

/** One parameter from its word. */
export function decodeField(parameter: Parameter, content: number, raw: number): { value: ParameterValue | undefined; findings: ImageFinding[] } {
  const register = parameter.register!
  const place = spanText(register.address, register.bytes)
  const told = (code: ImageFinding['code'], message: string, value?: ParameterValue): ReturnType<typeof decodeField> =>
    ({ value, findings: [finding(code, parameter.name, register.address, message)] })
  if (register.values) {
    const own = register.bit === null ? raw : Math.floor(content / 2 ** register.bit) % 2 ** register.width!
    const member = Object.entries(register.values).find(([, listed]) => listed === own)?.[0]
    if (member === undefined) return told('unlisted-value', `${parameter.title} at ${place} holds the raw value ${own}, which the schema does not list.`)
    return { value: memberValue(parameter, member), findings: [] }
  }
  if (!exactPhysical(register.codec, raw)) return told('not-a-number', `${parameter.title} at ${place} holds ${toPhysical(register.codec, raw)}, which is no number a set can hold.`)
  const value = toPhysical(register.codec, raw)
  if (Object.is(value, -0)) return told('negative-zero', `${parameter.title} at ${place} holds −0; Detent writes +0.`, 0)
  const outside = register.access === 'rw' ? problemOfValue(parameter, value) : null
  return outside ? told('outside-schema', outside.message, value) : { value, findings: [] }
}

function memberValue(parameter: Parameter, member: string): ParameterValue {
  if (parameter.kind === 'boolean') return member === 'true'
  return parameter.choices?.find((choice) => String(choice) === member) ?? member
}

function reservedFindings(word: Word, content: number): ImageFinding[] {
  if (word.parameters[0].register!.bit === null) return []
  let outside = content
  for (const field of word.parameters) {
    const { bit, width } = field.register!
    outside -= (Math.floor(content / 2 ** bit!) % 2 ** width!) * 2 ** bit!
  }
  if (outside === word.reserved) return []
  return [finding('reserved-bits', '', word.address, `The bits of ${spanText(word.address, word.bytes)} outside its fields are ${hex(outside, word.bytes)}, not ${hex(word.reserved, word.bytes)}.`)]
}
