import { CHECKSUM_BITS, type ChecksumAlgorithm } from './checksum.ts'
import { parseEncoding, rawRange, type Encoding } from './encoding.ts'
import type { ImageLayout, ImageRegister } from './parameter-schema.ts'
import { isObject, shown, under, type Json, type ProblemList } from './problem-list.ts'
import { BYTE_ORDERS } from './read-register.ts'

const KEYS = new Set(['base', 'length', 'fill', 'writeGaps', 'byteOrder', 'addressWidth', 'loadAddress', 'checksum', 'layoutId', 'release'])
const ALGORITHMS = Object.keys(CHECKSUM_BITS) as ChecksumAlgorithm[]

/** Reads the root annotation `x-image`; null (and problems) when it cannot stand. */
export function readImageLayout(value: unknown, list: ProblemList): ImageLayout | null {
  const at = '/x-image'
  if (!isObject(value)) {
    list.add(value === undefined ? '' : at, 'image-missing', 'The schema needs an x-image object at its root that gives the length of the image.')
    return null
  }
  const before = list.problems.length
  list.onlyKeys(value, at, KEYS)
  const number = (key: string, otherwise: number, low: number, high: number): number =>
    value[key] === undefined ? otherwise : (list.integer(value, key, at, low, high) ?? otherwise)
  const addressWidth = value.addressWidth === undefined ? 8 : (list.oneOf(value, 'addressWidth', at, [8, 16] as const) ?? 8)
  const base = number('base', 0, 0, 65535)
  const length = list.integer(value, 'length', at, 1, 65536)
  const fill = number('fill', 255, 0, 255)
  const byteOrder = value.byteOrder === undefined ? 'little' : (list.oneOf(value, 'byteOrder', at, BYTE_ORDERS) ?? 'little')
  const loadAddress = number('loadAddress', base, 0, 0xffffffff)
  if (value.writeGaps !== undefined && typeof value.writeGaps !== 'boolean') {
    list.add(under(at, 'writeGaps'), 'not-a-boolean', `${shown(value.writeGaps)} is neither true nor false.`)
  }
  if (length === null) return null
  const space = addressWidth === 8 ? 256 : 65536
  if (base + length > space) {
    list.add(under(at, 'length'), 'beyond-addresses', `base ${base} + length ${length} is beyond the ${space} addresses of ${addressWidth} bit.`)
  }
  if (loadAddress + length > 2 ** 32) list.add(under(at, 'loadAddress'), 'beyond-addresses', 'loadAddress + length is beyond 32 bit.')

  const registers = { base, last: base + length - 1 }
  const layoutId = value.layoutId === undefined ? null : readLayoutId(value.layoutId, under(at, 'layoutId'), list)
  const release = value.release === undefined ? null : readImageRegister(value.release, under(at, 'release'), [], list)
  const checksum = value.checksum === undefined ? null : readChecksum(value.checksum, under(at, 'checksum'), registers, list)
  if (list.problems.length > before) return null
  return {
    base, length, fill, writeGaps: value.writeGaps === true, byteOrder, addressWidth, loadAddress,
    checksum: checksum === 'none' ? null : checksum, layoutId, release,
  }
}

interface Space { readonly base: number; readonly last: number }

function readImageRegister(value: unknown, at: string, more: readonly string[], list: ProblemList): ImageRegister | null {
  if (!isObject(value)) {
    list.add(at, 'not-an-object', `${shown(value)} is no object with an address and an encoding.`)
    return null
  }
  list.onlyKeys(value, at, new Set(['address', 'encoding', ...more]))
  const address = list.integer(value, 'address', at, 0, 65535)
  const encoding = typeof value.encoding === 'string' ? parseEncoding(value.encoding) : null
  if (!encoding || encoding.kind !== 'integer') {
    list.add(under(at, 'encoding'), 'bad-encoding', `${shown(value.encoding)} is no integer encoding (u8 i8 u16 i16 u32 i32).`)
    return null
  }
  if (address === null) return null
  return { address, bytes: encoding.bits / 8, encoding }
}

function readLayoutId(value: unknown, at: string, list: ProblemList): ImageLayout['layoutId'] {
  const register = readImageRegister(value, at, ['value'], list)
  if (!register) return null
  const { low, high } = rawRange(register.encoding)
  const id = list.integer(value as Json, 'value', at, low, high)
  return id === null ? null : { ...register, value: id }
}

function readChecksum(value: unknown, at: string, space: Space, list: ProblemList): ImageLayout['checksum'] | 'none' {
  if (isObject(value) && value.algorithm === 'none') {
    list.onlyKeys(value, at, new Set(['algorithm']))
    return 'none'
  }
  const register = readImageRegister(value, at, ['algorithm', 'from', 'to'], list)
  if (!register) return null
  const given = value as Json
  const algorithm = list.oneOf(given, 'algorithm', at, ALGORITHMS)
  const from = given.from === undefined ? space.base : list.integer(given, 'from', at, space.base, space.last)
  const to = given.to === undefined ? space.last : list.integer(given, 'to', at, space.base, space.last)
  if (!algorithm || from === null || to === null) return null
  if (from > to) list.add(under(at, 'to'), 'empty-range', `The range ends (${to}) before it begins (${from}).`)
  if (!fitsChecksum(register.encoding, algorithm)) {
    list.add(under(at, 'encoding'), 'bad-encoding', `${algorithm} needs an unsigned encoding of at least ${CHECKSUM_BITS[algorithm]} bit, not ${register.encoding.name}.`)
  }
  return { ...register, algorithm, from, to }
}

const fitsChecksum = (encoding: Encoding, algorithm: ChecksumAlgorithm): boolean =>
  !encoding.signed && encoding.bits >= CHECKSUM_BITS[algorithm]
