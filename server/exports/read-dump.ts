import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import type { DumpImage } from '../../shared/registers/read-back.ts'
import { addressText, fault, type FileFault, type FileReading } from './byte-map.ts'
import { readByteCsv } from './read-byte-csv.ts'
import { readIntelHex } from './read-intel-hex.ts'
import { readSRecord } from './read-s-record.ts'

export const DUMP_FORMATS = ['bin', 'hex', 'srec', 'csv'] as const
export type DumpFormat = (typeof DUMP_FORMATS)[number]

/** A dump of 64 KiB as address/value rows stays under this. */
export const MAX_DUMP_BYTES = 2_000_000

/** First bytes of files that are no dump, whatever their name says. */
const FOREIGN: readonly (readonly [string, readonly number[]])[] = [
  ['a zip archive', [0x50, 0x4b, 0x03, 0x04]],
  ['a gzip archive', [0x1f, 0x8b]],
  ['a PDF', [0x25, 0x50, 0x44, 0x46]],
  ['a PNG picture', [0x89, 0x50, 0x4e, 0x47]],
  ['an ELF program', [0x7f, 0x45, 0x4c, 0x46]],
]

/** What a file is by its first bytes; null for anything that may be a raw image. */
export function foreignType(content: Uint8Array): string | null {
  return FOREIGN.find(([, magic]) => magic.every((byte, k) => content[k] === byte))?.[0] ?? null
}

/** Format by the file's name ending; null when it tells nothing. */
export function formatOfName(name: string): DumpFormat | null {
  const ending = /\.([a-z0-9]+)$/i.exec(name)?.[1].toLowerCase() ?? ''
  if (ending === 'bin') return 'bin'
  if (ending === 'hex' || ending === 'ihex' || ending === 'ihx') return 'hex'
  if (['srec', 's19', 's28', 's37', 'mot'].includes(ending)) return 'srec'
  return ending === 'csv' ? 'csv' : null
}

export type DumpReading = DumpImage | FileFault

/**
 * An uploaded dump as the bytes of a schema's image.
 *
 * A raw dump has exactly the image's length. HEX and S-record begin at the load address; a table has register addresses.
 * Bytes beyond the image, wrong checksums, lengths, order and doubles are refused with line or byte and address; bytes
 * that a dump leaves out are marked as not read.
 */
export function readDump(format: DumpFormat, content: Uint8Array, schema: ParameterSchema): DumpReading {
  if (content.length === 0) return fault('The file is empty.', { byte: 0 })
  if (content.length > MAX_DUMP_BYTES) return fault(`The file has ${content.length} bytes; a dump has at most ${MAX_DUMP_BYTES}.`, { byte: MAX_DUMP_BYTES })
  const { length, loadAddress, base } = schema.image
  if (format === 'bin') return rawDump(content, length)
  const foreign = foreignType(content)
  if (foreign) return fault(`The file is ${foreign}, no ${format} dump.`, { byte: 0 })
  const text = textOf(content)
  if (typeof text !== 'string') return text
  const reading: FileReading = format === 'hex' ? readIntelHex(text) : format === 'srec' ? readSRecord(text) : readByteCsv(text)
  if (reading.kind === 'refused') return reading
  return placed(reading.runs, format === 'csv' ? base : loadAddress, length)
}

function rawDump(content: Uint8Array, length: number): DumpReading {
  if (content.length !== length) {
    const foreign = foreignType(content)
    const more = content.length > length ? `byte ${length} lies beyond the image` : `${length - content.length} bytes are missing`
    return fault(`The dump has ${content.length} bytes, the image ${length}: ${more}.${foreign ? ` The file looks like ${foreign}.` : ''}`, { byte: Math.min(content.length, length) })
  }
  return { kind: 'dump', image: content.slice(), present: new Uint8Array(length).fill(1) }
}

function textOf(content: Uint8Array): string | FileFault {
  for (const [byte, value] of content.entries()) {
    if (value === 0 || (value < 32 && value !== 9 && value !== 10 && value !== 13)) return fault(`Byte ${byte} (0x${value.toString(16).padStart(2, '0')}) does not belong in a text file.`, { byte })
  }
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(content)
  } catch {
    return fault('The file is no text in UTF-8.', { byte: 0 })
  }
}

function placed(runs: readonly { address: number; bytes: Uint8Array; line: number }[], start: number, length: number): DumpReading {
  const image = new Uint8Array(length)
  const present = new Uint8Array(length)
  for (const run of runs) {
    const at = run.address - start
    if (at < 0 || at + run.bytes.length > length) {
      const beyond = at < 0 ? run.address : Math.max(run.address, start + length)
      return fault(`Line ${run.line} writes ${addressText(beyond)}, outside the image, which is ${addressText(start)} to ${addressText(start + length - 1)}.`, { line: run.line, address: beyond })
    }
    image.set(run.bytes, at)
    present.fill(1, at, at + run.bytes.length)
  }
  if (runs.length === 0) return fault('The file holds no data.', { line: 1 })
  return { kind: 'dump', image, present }
}
