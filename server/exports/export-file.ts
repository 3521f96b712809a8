import { encodeImage, type EncodedImage } from '../../shared/registers/encode-image.ts'
import type { ParameterSchema, ParameterValues } from '../../shared/registers/parameter-schema.ts'
import type { ValueProblem } from '../../shared/registers/value-check.ts'
import { writeCHeader } from './c-header.ts'
import { BENCH_MARK, EXPORTER_VERSION, fileStem, releaseNumber, type ExportContext } from './export-context.ts'
import { imageRuns } from './image-runs.ts'
import { writeIntelHex } from './intel-hex.ts'
import { writeRecord } from './record.ts'
import { writeRegisterTable } from './register-table.ts'
import { writeSRecord } from './s-record.ts'
import { writeSystemRdl } from './systemrdl.ts'
import { writeWriteList } from './write-list.ts'

export const EXPORT_FORMATS = ['bin', 'hex', 'srec', 'h', 'csv', 'json', 'write-list', 'systemrdl'] as const
export type ExportFormat = (typeof EXPORT_FORMATS)[number]

export const isExportFormat = (text: string): text is ExportFormat => (EXPORT_FORMATS as readonly string[]).includes(text)

export interface ExportedFile {
  readonly kind: 'file'
  readonly format: ExportFormat
  readonly name: string
  readonly mediaType: string
  readonly bytes: Uint8Array
}

export type ExportResult = ExportedFile | { readonly kind: 'refused'; readonly problems: readonly ValueProblem[] }

interface Form {
  readonly ending: string
  readonly mediaType: string
  readonly write: (schema: ParameterSchema, encoded: EncodedImage, context: ExportContext) => string | Uint8Array
}

const FORMS: Readonly<Record<ExportFormat, Form>> = {
  bin: { ending: '.bin', mediaType: 'application/octet-stream', write: (_schema, encoded) => encoded.image },
  hex: { ending: '.hex', mediaType: 'text/plain; charset=us-ascii', write: (schema, encoded) => writeIntelHex(imageRuns(schema, encoded)) },
  srec: { ending: '.srec', mediaType: 'text/plain; charset=us-ascii', write: (schema, encoded, context) => writeSRecord(imageRuns(schema, encoded), headerText(context)) },
  h: { ending: '.h', mediaType: 'text/x-c; charset=utf-8', write: writeCHeader },
  csv: { ending: '.csv', mediaType: 'text/csv; charset=utf-8', write: writeRegisterTable },
  json: { ending: '.json', mediaType: 'application/json', write: writeRecord },
  'write-list': { ending: '.write-list.csv', mediaType: 'text/csv; charset=utf-8', write: writeWriteList },
  systemrdl: { ending: '.rdl', mediaType: 'text/plain; charset=utf-8', write: (schema, _encoded, context) => writeSystemRdl(schema, context) },
}

/** Header of the S-record: empty for a release (its bytes are named by its hash), the mark for anything else. */
function headerText({ status }: ExportContext): string {
  if (status.kind === 'release') return ''
  return status.kind === 'bench' ? `${BENCH_MARK}, ${status.board}` : 'unreleased'
}

/** One file from an image that is already encoded. The same input gives the same bytes, always. */
export function writeExport(format: ExportFormat, schema: ParameterSchema, encoded: EncodedImage, context: ExportContext): ExportedFile {
  const form = FORMS[format]
  const content = form.write(schema, encoded, context)
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content
  return { kind: 'file', format, name: fileStem(context) + form.ending, mediaType: form.mediaType, bytes }
}

/**
 * One file of a joint's set.
 *
 * @param form  form that the release was made with; today there is one
 * @throws      RangeError when a release names a form this program does not know
 */
export function exportFile(format: ExportFormat, schema: ParameterSchema, values: ParameterValues, context: ExportContext, form = EXPORTER_VERSION): ExportResult {
  if (form !== EXPORTER_VERSION) throw new RangeError(`Files of form ${form} cannot be made; this program knows form ${EXPORTER_VERSION}.`)
  const encoded = encodeImage(schema, values, { release: releaseNumber(context) })
  return encoded.kind === 'refused' ? encoded : writeExport(format, schema, encoded, context)
}

/** Every file of a joint. */
export const exportAll = (schema: ParameterSchema, encoded: EncodedImage, context: ExportContext): ExportedFile[] =>
  EXPORT_FORMATS.map((format) => writeExport(format, schema, encoded, context))
