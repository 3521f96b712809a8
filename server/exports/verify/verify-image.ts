import { bitsOf, fieldBits, signedValue, unsigned, withoutField } from './bits-of.ts'
import { plainChecksum } from './long-division.ts'
import { isNearest, readNumberForm } from './number-forms.ts'
import { decimalText, order, plainDecimal } from './plain-decimals.ts'

type Json = Record<string, unknown>

export interface VerifyInput {
  /** The schema as stored: the raw JSON, not what the encoder made of it. */
  readonly schema: unknown
  readonly image: Uint8Array
  /** The values as stored, typed; those left out take the schema's defaults. */
  readonly values: Readonly<Record<string, unknown>>
  /** Sequence number of the release; 0 for unreleased. */
  readonly release: number
}

export interface ImageDifference {
  /** Parameter, or `checksum`, `layout id`, `release`, `fill`, `length`, `reserved bits`. */
  readonly where: string
  readonly address: number
  readonly message: string
}

export type VerifyResult =
  | { readonly kind: 'agrees'; /** Values as this decoder reads them, numbers as exact decimals. */ readonly decoded: Readonly<Record<string, string>> }
  | { readonly kind: 'differs'; readonly differences: readonly ImageDifference[] }

interface Place { name: string; leaf: Json; register: Json; address: number; bytes: number; order: string }

/**
 * Second, independent decoding of an image, compared with the stored values.
 *
 * Shares no code with the encoder: its own reading of the schema, bit texts instead of arithmetic, scaled decimals
 * instead of rationals, distances instead of rounding, checksums by long division. Every byte of the image must be
 * accounted for: by a value, the layout id, the release, the checksum, or the fill.
 *
 * @source register-image.md; ISO 13849-1:2015 §4.6.4 (encode and decode diverse, from memory)
 */
export function verifyImage({ schema, image, values, release }: VerifyInput): VerifyResult {
  const root = schema as Json
  const map = root['x-image'] as Json
  const base = Number(map.base ?? 0)
  const differences: ImageDifference[] = []
  const tell = (where: string, address: number, message: string): void => void differences.push({ where, address, message })
  if (image.length !== map.length) {
    tell('length', base, `The image has ${image.length} bytes, the schema says ${String(map.length)}.`)
    return { kind: 'differs', differences }
  }
  const owner: (string | null)[] = new Array<string | null>(image.length).fill(null)
  const cut = (address: number, bytes: number, name: string): Uint8Array => {
    owner.fill(name, address - base, address - base + bytes)
    return image.subarray(address - base, address - base + bytes)
  }
  const decoded: Record<string, string> = {}
  const rest = new Map<number, { bits: string; wanted: bigint; address: number }>()
  const places = placesOf(root, String(map.byteOrder ?? 'little'))
  for (const name of Object.keys(values)) {
    if (!places.some((place) => place.name === name && (place.register.access ?? 'rw') !== 'ro')) tell(name, base, `A value is stored for ${name}, which the image cannot hold.`)
  }
  for (const place of places) {
    if ((place.register.access ?? 'rw') !== 'rw') continue
    const bits = bitsOf(cut(place.address, place.bytes, place.name), place.order)
    const stored = Object.hasOwn(values, place.name) ? values[place.name] : (place.leaf.default ?? place.leaf.const)
    const found = place.leaf.enum !== undefined || place.leaf.type === 'boolean' ? readMember(place, bits) : null
    if (found !== null) {
      decoded[place.name] = found
      if (!sameMember(found, stored)) tell(place.name, place.address, `${place.name} reads ${found}, stored is ${String(stored)}.`)
      noteRest(rest, place, bits)
    } else readNumber(place, bits, stored, decoded, tell)
  }
  for (const { bits, wanted, address } of rest.values()) {
    if (unsigned(bits) !== wanted) tell('reserved bits', address, `The bits outside the fields are ${unsigned(bits)}, not ${wanted}.`)
  }
  ownRegisters(map, cut, release, tell)
  checkChecksum(map, base, image, cut, tell)
  for (const [k, byte] of image.entries()) {
    if (owner[k] === null && byte !== Number(map.fill ?? 255)) tell('fill', base + k, `Byte 0x${(base + k).toString(16)} belongs to no register and is ${byte}, not the fill.`)
  }
  return differences.length === 0 ? { kind: 'agrees', decoded } : { kind: 'differs', differences }
}

type Tell = (where: string, address: number, message: string) => void
type Cut = (address: number, bytes: number, name: string) => Uint8Array

/** Bytes of an encoding, from the sum of the digits in its name. */
function bytesOf(encoding: string): number {
  const fixed = /^(u?)q(\d+)\.(\d+)$/.exec(encoding)
  const bits = fixed ? Number(fixed[2]) + Number(fixed[3]) + (fixed[1] === '' ? 1 : 0) : Number(encoding.slice(1))
  return bits / 8
}

function placesOf(root: Json, mapOrder: string): Place[] {
  const places: Place[] = []
  for (const [name, stated] of Object.entries(root.properties as Json)) {
    const leaf = flattened(root, stated as Json)
    const register = leaf['x-register'] as Json | undefined
    if (register) places.push({ name, leaf, register, address: Number(register.address), bytes: bytesOf(String(register.encoding)), order: String(register.byteOrder ?? mapOrder) })
  }
  return places
}

/** A leaf with what its references say; the nearer word counts. A chain longer than 40 is not followed. */
function flattened(root: Json, leaf: Json): Json {
  const chain: Json[] = [leaf]
  for (let k = 0; k < 40 && typeof chain[0].$ref === 'string'; k += 1) {
    const path = decodeURIComponent(chain[0].$ref).split('/').slice(1)
    chain.unshift(path.reduce<Json>((node, step) => node[step.replaceAll('~1', '/').replaceAll('~0', '~')] as Json, root))
  }
  return Object.assign({}, ...chain) as Json
}

function readMember(place: Place, bits: string): string {
  const { bit, width, values } = place.register
  const raw = bit === undefined
    ? (String(place.register.encoding).startsWith('i') ? signedValue(bits) : unsigned(bits))
    : unsigned(fieldBits(bits, Number(bit), Number(width ?? 1)))
  const listed = Object.entries((values as Json | undefined) ?? { false: 0, true: 1 })
  return listed.find(([, value]) => BigInt(Number(value)) === raw)?.[0] ?? `the unlisted raw value ${raw}`
}

function sameMember(found: string, stored: unknown): boolean {
  if (found === String(stored)) return true
  const a = plainDecimal(found)
  const b = plainDecimal(stored)
  return a !== null && b !== null && order(a, b) === 0
}

/** Clears a field's bits from its word; what is left when every field is cleared must be the reserved bits. */
function noteRest(rest: Map<number, { bits: string; wanted: bigint; address: number }>, place: Place, bits: string): void {
  if (place.register.bit === undefined) return
  const before = rest.get(place.address) ?? { bits, wanted: 0n, address: place.address }
  const stated = place.register.reserved === undefined ? before.wanted : BigInt(Number(place.register.reserved))
  rest.set(place.address, { address: place.address, wanted: stated, bits: withoutField(before.bits, Number(place.register.bit), Number(place.register.width ?? 1)) })
}

function readNumber(place: Place, bits: string, stored: unknown, decoded: Record<string, string>, tell: Tell): void {
  const { encoding, scale, offset } = place.register
  const reading = readNumberForm(bits, String(encoding), scale, offset)
  if (reading.kind === 'no-number') return tell(place.name, place.address, `${place.name} holds ${reading.what}.`)
  decoded[place.name] = decimalText(reading.value)
  const wanted = plainDecimal(stored)
  if (!wanted) return tell(place.name, place.address, `The stored value of ${place.name}, ${String(stored)}, is no number.`)
  if (!isNearest(reading, wanted)) tell(place.name, place.address, `${place.name} reads ${decoded[place.name]}, which is not what ${decimalText(wanted)} becomes in ${String(encoding)}.`)
}

function ownRegisters(map: Json, cut: Cut, release: number, tell: Tell): void {
  const own = [['layout id', map.layoutId, (map.layoutId as Json | undefined)?.value], ['release', map.release, release]] as const
  for (const [name, stated, wanted] of own) {
    if (stated === undefined) continue
    const { address, encoding } = stated as Json
    const bits = bitsOf(cut(Number(address), bytesOf(String(encoding)), name), String(map.byteOrder ?? 'little'))
    const found = String(encoding).startsWith('i') ? signedValue(bits) : unsigned(bits)
    if (found !== BigInt(Number(wanted))) tell(name, Number(address), `The ${name} reads ${found}, not ${String(wanted)}.`)
  }
}

function checkChecksum(map: Json, base: number, image: Uint8Array, cut: Cut, tell: Tell): void {
  const stated = map.checksum as Json | undefined
  if (!stated || stated.algorithm === 'none') return
  const address = Number(stated.address)
  const bytes = bytesOf(String(stated.encoding))
  const found = unsigned(bitsOf(cut(address, bytes, 'checksum'), String(map.byteOrder ?? 'little')))
  const from = Number(stated.from ?? base)
  const to = Number(stated.to ?? base + image.length - 1)
  const covered = Array.from(image, (byte, k) => ({ byte, at: base + k })).filter(({ at }) => at >= from && at <= to && (at < address || at >= address + bytes))
  const right = plainChecksum(String(stated.algorithm), covered.map(({ byte }) => byte))
  if (right === null) tell('checksum', address, `The checksum ${String(stated.algorithm)} is not known.`)
  else if (right !== found) tell('checksum', address, `The checksum reads ${found.toString(16)}, the bytes give ${right.toString(16)}.`)
}
