import { hex } from './export-context.ts'
import { pieces, type Run } from './image-runs.ts'

/**
 * Intel HEX: data (00) in lines of 16 bytes, extended linear addresses (04) where the upper half changes, end (01).
 *
 * @source Intel, Hexadecimal Object File Format Specification, Revision A, 1988
 */
export function writeIntelHex(runs: readonly Run[]): string {
  let text = ''
  let upper = 0
  for (const { address, bytes } of pieces(runs, 16, 0x10000)) {
    const half = Math.floor(address / 0x10000)
    if (half !== upper) {
      text += record(0, 4, Uint8Array.of(half >> 8, half & 0xff))
      upper = half
    }
    text += record(address % 0x10000, 0, bytes)
  }
  return text + record(0, 1, new Uint8Array())
}

function record(offset: number, type: number, data: Uint8Array): string {
  let sum = data.length + (offset >> 8) + (offset & 0xff) + type
  let digits = ''
  for (const byte of data) {
    sum += byte
    digits += hex(byte, 2)
  }
  return `:${hex(data.length, 2)}${hex(offset, 4)}${hex(type, 2)}${digits}${hex(-sum & 0xff, 2)}\n`
}
