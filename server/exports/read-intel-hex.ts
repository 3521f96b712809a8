import { addressText, fault, faultOfOrder, hexDigits, linesOf, type FileFault, type FileReading } from './byte-map.ts'

export interface HexRecord {
  readonly kind: 'record'
  readonly type: number
  readonly offset: number
  readonly data: Uint8Array
}

/** Length of data that each record type but data itself must have. */
const DATA_LENGTH: Readonly<Record<number, number>> = { 1: 0, 2: 2, 3: 4, 4: 2, 5: 4 }

/**
 * One line of Intel HEX: mark, length, checksum, type.
 *
 * @source Intel, Hexadecimal Object File Format Specification, Revision A, 1988
 */
export function readHexRecord(line: string, number: number): HexRecord | FileFault {
  if (!line.startsWith(':')) return fault(`Line ${number} does not begin with a colon.`, { line: number, column: 1 })
  const bytes = hexDigits(line, 1, number)
  if (!(bytes instanceof Uint8Array)) return bytes
  if (bytes.length < 5) return fault(`Line ${number} is too short for an Intel HEX record.`, { line: number, column: line.length + 1 })
  if (bytes.length !== bytes[0] + 5) {
    return fault(`Line ${number} announces ${bytes[0]} data bytes and has ${bytes.length - 5}.`, { line: number, column: 2 })
  }
  const right = -bytes.subarray(0, -1).reduce((sum, byte) => sum + byte, 0) & 0xff
  if (bytes[bytes.length - 1] !== right) {
    return fault(`Line ${number} ends with the checksum ${pair(bytes[bytes.length - 1])}; its bytes give ${pair(right)}.`, { line: number, column: line.length - 1 })
  }
  const type = bytes[3]
  const data = bytes.subarray(4, -1)
  if (type > 5) return fault(`Line ${number} has the record type ${pair(type)}; 00 to 05 are known.`, { line: number, column: 8 })
  if (type !== 0 && data.length !== DATA_LENGTH[type]) {
    return fault(`Line ${number}: a record of type ${pair(type)} has ${DATA_LENGTH[type]} data bytes, not ${data.length}.`, { line: number, column: 2 })
  }
  return { kind: 'record', type, offset: bytes[1] * 256 + bytes[2], data }
}

const pair = (byte: number): string => byte.toString(16).toUpperCase().padStart(2, '0')

/** A whole Intel HEX file. Addresses must rise, no byte stands twice, at most one start address, one end record closes it and nothing follows. */
export function readIntelHex(text: string): FileReading {
  const runs: { address: number; bytes: Uint8Array; line: number }[] = []
  let base = 0
  let segmented = false
  let started = 0
  let last: { address: number; length: number; line: number } | null = null
  const lines = linesOf(text)
  for (const [k, line] of lines.entries()) {
    const number = k + 1
    const record = readHexRecord(line, number)
    if (record.kind === 'refused') return record
    const { type, offset, data } = record
    if (type === 1) {
      if (number < lines.length) return fault(`Line ${number + 1} follows the end record.`, { line: number + 1, column: 1 })
      return { kind: 'bytes', runs }
    }
    if (type === 2 || type === 4) {
      segmented = type === 2
      base = (data[0] * 256 + data[1]) * (segmented ? 16 : 65536)
    }
    if (type === 3 || type === 5) {
      if (started > 0) return fault(`Line ${number} is a second start address; line ${started} has one.`, { line: number, column: 1 })
      started = number
    }
    if (type !== 0 || data.length === 0) continue
    const address = base + offset
    if (segmented && offset + data.length > 65536) return fault(`Line ${number} runs over the end of its segment.`, { line: number, address })
    if (address + data.length > 2 ** 32) return fault(`Line ${number} runs over the last address, ${addressText(2 ** 32 - 1)}.`, { line: number, address })
    const wrong = faultOfOrder(last, address, number)
    if (wrong) return wrong
    last = { address, length: data.length, line: number }
    runs.push({ address, bytes: data, line: number })
  }
  return fault('The file has no end record (:00000001FF); it may be cut off.', { line: lines.length + 1 })
}
