import type { EncodedImage, RegisterRow } from '../../shared/registers/encode-image.ts'
import type { Parameter, ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import { rawToWord } from '../../shared/registers/word-bytes.ts'
import { hex, oneLine, titleLine, type ExportContext } from './export-context.ts'
import { Identifiers, upperSnake } from './identifiers.ts'
import { sha256 } from './record.ts'

/** A text that cannot end the comment it stands in. */
const inComment = (text: string): string => oneLine(text).replaceAll('*/', '* /').replaceAll('/*', '/ *')

/** C header: register addresses and raw values as macros, physical values and units beside them. */
export function writeCHeader(schema: ParameterSchema, encoded: EncodedImage, context: ExportContext): string {
  const line = upperSnake(context.firmware.line)
  const prefix = /^\d/.test(line) ? `FW_${line}` : line
  const guard = `DETENT_${prefix}_${upperSnake(context.machine)}_${upperSnake(context.joint)}_H`
  const digits = schema.image.addressWidth / 4
  const rows = new Map(encoded.rows.map((row) => [row.parameter, row]))
  const names = new Identifiers()
  const address = (value: number): string => `0x${hex(value, digits)}u`
  const image = schema.image
  const parts = [
    `/* ${inComment(titleLine(context))}\n * Written by Detent ${inComment(context.toolVersion)}. SHA-256 of the image: ${sha256(encoded.image)} */`,
    `#ifndef ${guard}\n#define ${guard}`,
    [
      define(`${prefix}_IMAGE_BASE`, address(image.base)),
      define(`${prefix}_IMAGE_LENGTH`, `${image.length}u`),
      ...imageWords(schema, encoded, prefix, address, names),
    ].join('\n'),
    ...schema.parameters.filter((p) => p.register).map((p) => parameterPart(p, rows.get(p.name), `${prefix}_${upperSnake(p.name)}`, address, names)),
    `#endif /* ${guard} */`,
  ]
  return `${parts.join('\n\n')}\n`
}

const define = (name: string, value: string): string => `#define ${name} ${value}`

function imageWords(schema: ParameterSchema, encoded: EncodedImage, prefix: string, address: (value: number) => string, names: Identifiers): string[] {
  const lines: string[] = []
  for (const word of encoded.words) {
    if (word.kind === 'parameter') continue
    const name = names.take(`${prefix}_IMAGE_${upperSnake(word.kind)}`)
    const note = word.kind === 'checksum' ? `  /* ${schema.image.checksum?.algorithm} */` : ''
    lines.push(define(`${name}_REG`, address(word.address)), define(`${name}_RAW`, `0x${hex(word.word, word.bytes.length * 2)}u`) + note)
  }
  return lines
}

function parameterPart(parameter: Parameter, row: RegisterRow | undefined, wanted: string, address: (value: number) => string, names: Identifiers): string {
  const register = parameter.register!
  const name = names.take(wanted)
  const unit = parameter.unit ? ` ${parameter.unit}` : ''
  const value = row ? `: ${row.physical}${unit}${row.physical === row.typed ? '' : ` (typed ${row.typed}${unit})`}` : unit && `, in${unit}`
  const scaled = register.scale === '1' && register.offset === '0' ? '' : `, ${register.scale}·raw + ${register.offset}`
  const lines = [
    `/* ${inComment(`${parameter.title}, ${register.encoding.name}${scaled}, ${register.byteOrder} endian, ${register.access}${value}`)} */`,
    define(`${name}_REG`, address(register.address)),
  ]
  if (register.bit !== null && register.width !== null) {
    lines.push(define(`${name}_BIT`, `${register.bit}u`))
    lines.push(define(`${name}_MASK`, `0x${hex((2 ** register.width - 1) * 2 ** register.bit, register.bytes * 2)}u`))
  }
  if (row) lines.push(define(`${name}_RAW`, `0x${hex(rawToWord(row.raw, register.encoding.bits), register.bytes * 2)}u`))
  return lines.join('\n')
}
