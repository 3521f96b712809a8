import type { EncodedImage } from '../../shared/registers/encode-image.ts'
import type { Parameter, ParameterSchema, Word } from '../../shared/registers/parameter-schema.ts'
import { csvLine } from './csv-text.ts'
import { hex, hexBytes } from './export-context.ts'

const COLUMNS = ['register', 'length', 'parameter', 'title', 'access', 'encoding', 'byte order', 'bit', 'width', 'bytes', 'raw', 'typed', 'value', 'unit', 'rounding error', 'role']
const IMAGE_WORDS = { checksum: 'Checksum', 'layout-id': 'Layout id', release: 'Release number', parameter: '' } as const

/** Register table as CSV: every word of the map by address, read-only ones without a value. */
export function writeRegisterTable(schema: ParameterSchema, encoded: EncodedImage): string {
  const digits = schema.image.addressWidth / 4
  const rows = new Map(encoded.rows.map((row) => [row.parameter, row]))
  const words = new Map(encoded.words.map((word) => [word.address, word]))
  let text = csvLine(COLUMNS)
  const head = (word: Word, name: string, title: string): (string | number)[] =>
    [`0x${hex(word.address, digits)}`, word.bytes, name, title, word.access, word.encoding.name, word.byteOrder]
  const line = (word: Word, parameter: Parameter): string => {
    const row = rows.get(parameter.name)
    return csvLine([
      ...head(word, parameter.name, parameter.title), parameter.register?.bit ?? null, parameter.register?.width ?? null,
      row ? hexBytes(row.bytes) : null, row ? row.raw : null, row ? String(row.typed) : null, row ? String(row.physical) : null,
      parameter.unit, row ? row.errorAbsolute : null, parameter.role,
    ])
  }
  for (const word of schema.words) {
    if (word.kind === 'parameter') for (const parameter of word.parameters) text += line(word, parameter)
    else {
      const own = words.get(word.address)
      text += csvLine([...head(word, '', IMAGE_WORDS[word.kind]), null, null, own ? hexBytes(own.bytes) : null, own ? own.word : null, null, null, null, null, null])
    }
  }
  return text
}
