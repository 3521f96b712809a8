import { hex } from './export-context.ts'
import { pieces, type Run } from './image-runs.ts'

/**
 * Motorola S-record: S0, data in the shortest of S1, S2, S3 that reaches every address, S5 or S6 with the count of
 * data records, and the end record that belongs to the data's (S9, S8, S7) with start address 0.
 *
 * @param header  text of S0, ASCII, at most 40 characters; other characters become `-`
 * @source        srec_motorola(5), srecord 1.64
 */
export function writeSRecord(runs: readonly Run[], header: string): string {
  const last = runs.reduce((high, run) => Math.max(high, run.address + run.bytes.length - 1), 0)
  const width = last <= 0xffff ? 2 : last <= 0xffffff ? 3 : 4
  const name = Uint8Array.from(header.slice(0, 40), (c) => (c >= ' ' && c <= '~' ? c.charCodeAt(0) : 0x2d))
  let text = record(0, 0, 2, name)
  let count = 0
  for (const { address, bytes } of pieces(runs, 16, 2 ** 32)) {
    text += record(width - 1, address, width, bytes)
    count += 1
  }
  text += count <= 0xffff ? record(5, count, 2, new Uint8Array()) : record(6, count, 3, new Uint8Array())
  return text + record(11 - width, 0, width, new Uint8Array())
}

function record(type: number, address: number, width: number, data: Uint8Array): string {
  const count = width + data.length + 1
  let sum = count
  for (let k = 0; k < width; k += 1) sum += Math.floor(address / 256 ** k) & 0xff
  let digits = ''
  for (const byte of data) {
    sum += byte
    digits += hex(byte, 2)
  }
  return `S${type}${hex(count, 2)}${hex(address, width * 2)}${digits}${hex(~sum & 0xff, 2)}\n`
}
