import { fault, linesOf, type FileFault } from '../../exports/byte-map.ts'
import { foreignType } from '../../exports/read-dump.ts'
import { readHexRecord } from '../../exports/read-intel-hex.ts'
import type { FirmwareImageFormat } from './firmware-version.entity.ts'

export type FirmwareSniff = { kind: 'firmware'; format: FirmwareImageFormat } | FileFault

/** Endings that people give the two forms; others say nothing. */
const endings: Record<string, FirmwareImageFormat> = { bin: 'bin', hex: 'hex', ihex: 'hex', ihx: 'hex' }

const endingOf = (name: string) => /\.([a-z0-9]+)$/i.exec(name)?.[1].toLowerCase() ?? ''

/**
 * What a firmware image is by its bytes: Intel HEX, every line of which holds and whose last is the end record, or a raw image. Anything
 * known to be something else is refused, and so is a name that says otherwise.
 */
export function sniffFirmware(content: Uint8Array, name: string): FirmwareSniff {
  const foreign = foreignType(content)
  if (foreign) return fault(`The file is ${foreign}; a firmware image is a raw .bin or Intel HEX.`, { byte: 0 })
  const start = Buffer.from(content.subarray(0, 12)).toString('latin1')
  if (/^S[0-9][0-9A-F]{2}/i.test(start)) return fault('The file is an S-record; a firmware image is taken as a raw .bin or Intel HEX.', { line: 1 })
  const format: FirmwareImageFormat = /^(\ufeff|\xef\xbb\xbf)?:[0-9A-F]{2}/i.test(start) ? 'hex' : 'bin'
  const named = endings[endingOf(name)]
  if (named && named !== format) return fault(`The file is called ${name}, but its bytes are ${format === 'hex' ? 'Intel HEX' : 'no Intel HEX'}. Give it the ending of what it is.`, { byte: 0 })
  if (format === 'bin') return { kind: 'firmware', format }
  return faultOfHex(Buffer.from(content).toString('latin1')) ?? { kind: 'firmware', format }
}

/** The first line of an Intel HEX file that does not hold; null when all do. Linkers may write in any order, so the order is theirs. */
function faultOfHex(text: string): FileFault | null {
  const lines = linesOf(text)
  for (const [k, line] of lines.entries()) {
    const record = readHexRecord(line, k + 1)
    if (record.kind === 'refused') return record
    if (record.type !== 1) continue
    return k + 1 < lines.length ? fault(`Line ${k + 2} follows the end record.`, { line: k + 2 }) : null
  }
  return fault('The file has no end record (:00000001FF); it may be cut off.', { line: lines.length + 1 })
}
