import { numberCodec, parseEncoding, physicalRange, rawRange, survivesDoubles } from './encoding.ts'
import type { Access, ParameterKind, Register } from './parameter-schema.ts'
import { isObject, shown, under, type Json, type ProblemList } from './problem-list.ts'
import { exactly, ONE, toDouble, ZERO, type Rational } from './rational.ts'
import type { ByteOrder } from './word-bytes.ts'

const KEYS = new Set(['address', 'encoding', 'byteOrder', 'access', 'scale', 'offset', 'bit', 'width', 'reserved', 'values'])
export const BYTE_ORDERS: readonly ByteOrder[] = ['little', 'big']
const ACCESSES: readonly Access[] = ['rw', 'ro', 'wo']

export interface LeafShape {
  readonly kind: ParameterKind
  readonly choices: readonly (string | number)[] | null
}

/** Reads one `x-register`; says what is wrong and returns null when it cannot stand. */
export function readRegister(value: unknown, at: string, leaf: LeafShape, mapOrder: ByteOrder, list: ProblemList): Register | null {
  if (!isObject(value)) {
    list.add(at, 'not-an-object', 'x-register must be an object with an address and an encoding.')
    return null
  }
  const before = list.problems.length
  list.onlyKeys(value, at, KEYS)
  const address = list.integer(value, 'address', at, 0, 65535)
  const encoding = typeof value.encoding === 'string' ? parseEncoding(value.encoding) : null
  if (!encoding) {
    list.add(under(at, 'encoding'), 'bad-encoding',
      `${shown(value.encoding)} is no encoding. Use u8 i8 u16 i16 u32 i32 f32, qM.F with 1 + M + F = 8, 16 or 32, or uqM.F with M + F = 8, 16 or 32.`)
  }
  const byteOrder = value.byteOrder === undefined ? mapOrder : list.oneOf(value, 'byteOrder', at, BYTE_ORDERS)
  const access = value.access === undefined ? 'rw' : list.oneOf(value, 'access', at, ACCESSES)
  if (address === null || !encoding || !byteOrder || !access) return null

  const isNumber = leaf.kind === 'number' || leaf.kind === 'integer'
  const scale = readDecimal(value, 'scale', '1', at, list)
  const offset = readDecimal(value, 'offset', '0', at, list)
  if (scale?.exact.n === 0n) list.add(under(at, 'scale'), 'zero-scale', 'A scale must not be 0.')
  if ((value.scale !== undefined || value.offset !== undefined) && (!isNumber || encoding.kind !== 'integer')) {
    list.add(under(at, value.scale === undefined ? 'offset' : 'scale'), 'scale-not-allowed',
      'Only a number in an integer encoding may have a scale and an offset.')
  }
  if (!isNumber && encoding.kind !== 'integer') {
    list.add(under(at, 'encoding'), 'bad-encoding', `A ${leaf.kind} needs an integer encoding, not ${encoding.name}.`)
  }
  const field = readField(value, at, isNumber, encoding.bits, list)
  const values = isNumber ? noValues(value, at, list) : readValues(value, at, leaf, list)
  if (values && field) checkValues(values, at, field.bit, field.width, encoding, list)
  if (list.problems.length > before || !scale || !offset || !field) return null

  const codec = numberCodec(encoding, scale.exact, offset.exact)
  if (!survivesDoubles(codec)) {
    const { low, high } = physicalRange(codec)
    list.add(under(at, 'scale'), 'scale-too-fine',
      `With this scale and offset (${shown(low)} to ${shown(high)}) neighbouring raw values read as the same number. Use a smaller offset or a scale nearer to 1.`)
    return null
  }
  return {
    address, bytes: encoding.bits / 8, encoding, byteOrder, access, scale: scale.text, offset: offset.text, codec,
    bit: field.bit, width: field.width, reserved: field.reserved, values,
  }
}

/** An exact decimal: a number, or its text where a double does not hold it. */
function readDecimal(value: Json, key: string, otherwise: '1' | '0', at: string, list: ProblemList): { text: string; exact: Rational } | null {
  if (value[key] === undefined) return { text: otherwise, exact: otherwise === '1' ? ONE : ZERO }
  const given = value[key]
  const exact = typeof given === 'number' || typeof given === 'string' ? exactly(given) : null
  if (exact && Math.abs(toDouble(exact)) < 1e300) return { text: String(given), exact }
  list.add(under(at, key), 'not-a-decimal', `${shown(given)} is no decimal number that a ${key} can be.`)
  return null
}

function readField(value: Json, at: string, isNumber: boolean, bits: number, list: ProblemList): { bit: number | null; width: number | null; reserved: number | null } | null {
  if (value.bit === undefined) {
    for (const key of ['width', 'reserved']) {
      if (value[key] !== undefined) list.add(under(at, key), 'field-without-bit', `“${key}” needs a bit: without one the register has the word to itself.`)
    }
    return { bit: null, width: null, reserved: null }
  }
  if (isNumber) {
    list.add(under(at, 'bit'), 'field-not-allowed', 'Only booleans and enums may be fields of a word.')
    return null
  }
  const bit = list.integer(value, 'bit', at, 0, bits - 1)
  if (bit === null) return null
  const width = value.width === undefined ? 1 : list.integer(value, 'width', at, 1, bits - bit)
  const reserved = value.reserved === undefined ? null : list.integer(value, 'reserved', at, 0, 2 ** bits - 1)
  return width === null ? null : { bit, width, reserved }
}

function noValues(value: Json, at: string, list: ProblemList): null {
  if (value.values !== undefined) list.add(under(at, 'values'), 'values-not-allowed', 'Only booleans and enums have values.')
  return null
}

function readValues(value: Json, at: string, leaf: LeafShape, list: ProblemList): Record<string, number> | null {
  const members = leaf.kind === 'boolean' ? ['false', 'true'] : (leaf.choices ?? []).map(String)
  if (value.values === undefined && leaf.kind === 'boolean') return { false: 0, true: 1 }
  if (!isObject(value.values)) {
    list.add(under(at, 'values'), 'values-missing', 'An enum needs “values”: the raw value of each of its members.')
    return null
  }
  const values: Record<string, number> = Object.create(null) as Record<string, number>
  for (const [member, raw] of Object.entries(value.values)) {
    const where = under(under(at, 'values'), member)
    if (!members.includes(member)) list.add(where, 'unknown-member', `“${member}” is no member of the ${leaf.kind}.`)
    else if (typeof raw !== 'number' || !Number.isInteger(raw)) list.add(where, 'not-in-range', `${shown(raw)} is no whole raw value.`)
    else values[member] = raw
  }
  for (const member of members) {
    if (!Object.hasOwn(value.values, member)) list.add(under(at, 'values'), 'member-missing', `“${member}” has no raw value.`)
  }
  return values
}

function checkValues(
  values: Readonly<Record<string, number>>, at: string, bit: number | null, width: number | null,
  encoding: Register['encoding'], list: ProblemList,
): void {
  const { low, high } = bit === null ? rawRange(encoding) : { low: 0, high: 2 ** (width ?? 1) - 1 }
  const taken = new Map<number, string>()
  for (const [member, raw] of Object.entries(values)) {
    const where = under(under(at, 'values'), member)
    if (raw < low || raw > high) list.add(where, 'not-in-range', `${raw} does not fit: ${bit === null ? encoding.name : `${width} bit`} holds ${low} to ${high}.`)
    const other = taken.get(raw)
    if (other !== undefined) list.add(where, 'same-raw-value', `${raw} already stands for “${other}”.`)
    taken.set(raw, member)
  }
}
