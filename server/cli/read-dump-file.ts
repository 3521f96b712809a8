import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import type { DumpImage } from '../../shared/registers/read-back.ts'
import { DUMP_FORMATS, formatOfName, MAX_DUMP_BYTES, readDump, type DumpFormat } from '../exports/read-dump.ts'
import { readBytes } from './read-bytes.ts'
import { Usage } from './usage.ts'

const isFormat = (text: string): text is DumpFormat => (DUMP_FORMATS as readonly string[]).includes(text)

/** A dump as the bytes of the schema's image. @throws Error naming line or byte */
export function readDumpFile(file: string, format: string | undefined, schema: ParameterSchema): DumpImage {
  const form = format ?? formatOfName(file)
  if (!form || !isFormat(form)) throw new Usage(`${format === undefined ? `The ending of ${file} does not say what it is` : `"${format}" is no format`}; --format takes ${DUMP_FORMATS.join(', ')}.`)
  const read = readDump(form, readBytes(file, MAX_DUMP_BYTES), schema)
  if (read.kind === 'dump') return read
  const place = read.line !== undefined ? `:${read.line}${read.column === undefined ? '' : `:${read.column}`}` : ''
  throw new Error(`${file}${place}: ${read.message}`)
}
