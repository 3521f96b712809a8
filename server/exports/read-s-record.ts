import { fault, faultOfOrder, hexDigits, linesOf, type FileFault, type FileReading } from './byte-map.ts'

export interface SRecord {
  readonly kind: 'record'
  readonly type: number
  readonly address: number
  readonly data: Uint8Array
}

/** Address bytes by record type; S4 is reserved. */
const WIDTHS: readonly number[] = [2, 2, 3, 4, 0, 2, 3, 4, 3, 2]

/**
 * One line of Motorola S-record: mark, length, checksum, type.
 *
 * @source srec_motorola(5), srecord 1.64
 */
export function readSRecordLine(line: string, number: number): SRecord | FileFault {
  const type = line.charCodeAt(1) - 48
  if (!/^[Ss]\d/.test(line)) return fault(`Line ${number} does not begin with S and a digit.`, { line: number, column: 1 })
  const width = WIDTHS[type]
  if (width === 0) return fault(`Line ${number} has the record type S4, which is reserved.`, { line: number, column: 2 })
  const bytes = hexDigits(line, 2, number)
  if (!(bytes instanceof Uint8Array)) return bytes
  if (bytes.length < width + 2) return fault(`Line ${number} is too short for an S${type} record.`, { line: number, column: line.length + 1 })
  if (bytes.length !== bytes[0] + 1) {
    return fault(`Line ${number} announces ${bytes[0]} bytes after its count and has ${bytes.length - 1}.`, { line: number, column: 3 })
  }
  const right = ~bytes.subarray(0, -1).reduce((sum, byte) => sum + byte, 0) & 0xff
  if (bytes[bytes.length - 1] !== right) {
    return fault(`Line ${number} ends with the checksum ${pair(bytes[bytes.length - 1])}; its bytes give ${pair(right)}.`, { line: number, column: line.length - 1 })
  }
  const data = bytes.subarray(1 + width, -1)
  if (type >= 5 && data.length > 0) return fault(`Line ${number}: an S${type} record has no data.`, { line: number, column: 3 })
  const address = bytes.subarray(1, 1 + width).reduce((value, byte) => value * 256 + byte, 0)
  return { kind: 'record', type, address, data }
}

const pair = (byte: number): string => byte.toString(16).toUpperCase().padStart(2, '0')

/**
 * A whole S-record file: S0 only first, addresses that rise, no byte twice, a count that agrees, nothing after the end
 * record. One of count and end record must be there. S1, S2 and S3 may follow each other, and a record may run past
 * its kind's last start address, since srec_cat writes both.
 */
export function readSRecord(text: string): FileReading {
  const runs: { address: number; bytes: Uint8Array; line: number }[] = []
  let last: { address: number; length: number; line: number } | null = null
  let count = 0
  let counted = false
  const lines = linesOf(text)
  for (const [k, line] of lines.entries()) {
    const number = k + 1
    const record = readSRecordLine(line, number)
    if (record.kind === 'refused') return record
    const { type, address, data } = record
    if (type === 0) {
      if (number > 1) return fault(`Line ${number} is a header (S0), which may only come first.`, { line: number, column: 1 })
    } else if (type <= 3) {
      if (counted) return fault(`Line ${number} has data after the count of line ${number - 1}.`, { line: number, column: 1 })
      const wrong = faultOfOrder(last, address, number)
      if (wrong) return wrong
      if (address + data.length > 2 ** 32) return fault(`Line ${number} runs over the last address, 0xFFFFFFFF.`, { line: number, address })
      count += 1
      if (data.length === 0) continue
      last = { address, length: data.length, line: number }
      runs.push({ address, bytes: data, line: number })
    } else if (type <= 6) {
      if (counted) return fault(`Line ${number} is a second count.`, { line: number, column: 1 })
      if (address !== count) return fault(`Line ${number} counts ${address} data records; there are ${count}.`, { line: number, column: 5 })
      counted = true
    } else {
      if (number < lines.length) return fault(`Line ${number + 1} follows the end record.`, { line: number + 1, column: 1 })
      return { kind: 'bytes', runs }
    }
  }
  // srec_cat writes no end record when it knows no start address; the count proves the file whole as well
  if (counted) return { kind: 'bytes', runs }
  return fault('The file has neither an end record (S9, S8 or S7) nor a count (S5 or S6); it may be cut off.', { line: lines.length + 1 })
}
