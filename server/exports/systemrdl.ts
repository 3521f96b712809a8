import { readValue } from '../../shared/registers/value-check.ts'
import type { Parameter, ParameterSchema, Word } from '../../shared/registers/parameter-schema.ts'
import { rawToWord } from '../../shared/registers/word-bytes.ts'
import { hex, oneLine, type ExportContext } from './export-context.ts'
import { Identifiers } from './identifiers.ts'

const PROPERTIES = `property detent_unit { component = field; type = string; };
property detent_encoding { component = field; type = string; };
property detent_scale { component = field; type = string; };
property detent_offset { component = field; type = string; };
property detent_role { component = field; type = string; };
property detent_byte_order { component = reg; type = string; };
`

const SW = { rw: 'rw', ro: 'r', wo: 'w' } as const
const HW = { rw: 'r', ro: 'w', wo: 'r' } as const

/** A quoted SystemRDL string. */
const quoted = (text: string): string => `"${oneLine(text).replaceAll('\\', '\\\\').replaceAll('"', '\\"')}"`

/** A name as an identifier; the leading letter keeps clear of every SystemRDL keyword, which are all lower case without it. */
const identifier = (name: string): string => `p_${name.replace(/[^A-Za-z0-9_]/g, '_')}`

/**
 * SystemRDL 2.0 of a register map: one register per word, one field per parameter, resets from the schema's defaults.
 *
 * Units, encodings, scales and byte order have no place in the language and stand in user-defined properties.
 *
 * @source Accellera SystemRDL 2.0 (January 2018): clauses 9 to 11 and 15
 */
export function writeSystemRdl(schema: ParameterSchema, { firmware }: Pick<ExportContext, 'firmware'>): string {
  const name = `${firmware.line} ${firmware.version}`
  const known = WRITTEN.get(schema)
  if (known?.name === name) return known.text
  const text = writeMap(schema, name)
  WRITTEN.set(schema, { name, text })
  return text
}

/** Maps already written: the text hangs on the schema alone, and a kit asks for it once a joint. */
const WRITTEN = new WeakMap<ParameterSchema, { name: string; text: string }>()

function writeMap(schema: ParameterSchema, title: string): string {
  const names = new Identifiers()
  const map = `map_${title.replace(/[^A-Za-z0-9_]/g, '_')}`
  const registers = schema.words.map((word) => register(schema, word, names))
  return `${PROPERTIES}
addrmap ${map} {
  name = ${quoted(title)};
  desc = ${quoted(schema.description || schema.title || map)};
  ${schema.image.byteOrder === 'big' ? 'bigendian' : 'littleendian'};
  addressing = compact;
  lsb0;

${registers.join('\n')}};
`
}

function register(schema: ParameterSchema, word: Word, names: Identifiers): string {
  const bits = word.encoding.bits
  const own = { checksum: 'Checksum', 'layout-id': 'Layout id', release: 'Release number', parameter: '' }[word.kind]
  const wanted = word.kind === 'parameter' ? identifier(word.parameters[0].name) : `image_${word.kind.replace('-', '_')}`
  const shared = word.parameters.length > 0 && word.parameters[0].register!.bit !== null
  const name = names.take(shared ? `word_${hex(word.address, 4)}` : wanted)
  const fields = word.kind === 'parameter' ? word.parameters.map((p) => field(p)) : [imageField(schema, word)]
  const title = word.kind === 'parameter' ? word.parameters.map((p) => p.title).join(', ') : own
  return `  reg {
    name = ${quoted(title)};
    regwidth = ${bits};
    accesswidth = ${bits};
    detent_byte_order = "${word.byteOrder}";
${fields.join('')}  } ${name} @0x${hex(word.address, 4)};
`
}

function field(parameter: Parameter): string {
  const register = parameter.register!
  const width = register.width ?? register.encoding.bits
  const low = register.bit ?? 0
  const reset = resetOf(parameter)
  const members = register.values && parameter.kind === 'enum' ? Object.entries(register.values) : []
  const enumName = `${identifier(parameter.name)}_values`
  const names = new Identifiers()
  const declared = members.length === 0 ? '' : `    enum ${enumName} {
${members.map(([member, raw]) => `      ${names.take(identifier(member))} = ${width}'h${hex(rawToWord(raw, width), 1)} { name = ${quoted(member)}; };`).join('\n')}
    };
`
  const lines = [
    `name = ${quoted(parameter.title)};`,
    `desc = ${quoted(parameter.description || parameter.title)};`,
    `sw = ${SW[register.access]};`,
    `hw = ${HW[register.access]};`,
    `detent_encoding = "${register.encoding.name}";`,
    ...(members.length > 0 ? [`encode = ${enumName};`] : []),
    ...(parameter.unit ? [`detent_unit = ${quoted(parameter.unit)};`] : []),
    ...(register.scale !== '1' ? [`detent_scale = ${quoted(register.scale)};`] : []),
    ...(register.offset !== '0' ? [`detent_offset = ${quoted(register.offset)};`] : []),
    ...(parameter.role ? [`detent_role = "${parameter.role}";`] : []),
  ]
  return `${declared}    field {
${lines.map((line) => `      ${line}\n`).join('')}    } ${identifier(parameter.name)}[${low + width - 1}:${low}]${reset === null ? '' : ` = ${width}'h${hex(reset, 1)}`};
`
}

/** Raw default of a parameter as an unsigned number; null for none. */
function resetOf(parameter: Parameter): number | null {
  const register = parameter.register!
  if (parameter.default === null || register.access === 'ro') return null
  const reading = readValue(parameter, parameter.default)
  return reading.kind === 'value' && reading.raw !== null ? rawToWord(reading.raw, register.encoding.bits) : null
}

function imageField(schema: ParameterSchema, word: Word): string {
  const reset = word.kind === 'layout-id' ? ` = ${word.encoding.bits}'h${hex(rawToWord(schema.image.layoutId!.value, word.encoding.bits), 1)}` : ''
  return `    field {
      sw = rw;
      hw = r;
      detent_encoding = "${word.encoding.name}";
    } value[${word.encoding.bits - 1}:0]${reset};
`
}
