import { parseArgs } from 'node:util'
import type { ParameterSchema, ParameterValue } from '../../shared/registers/parameter-schema.ts'
import { compareReadBack, type ReadBack, type WordDifference } from '../../shared/registers/read-back.ts'
import { expectedImage } from './expected-image.ts'
import { readDumpFile } from './read-dump-file.ts'
import { readSchemaFile } from './read-set-file.ts'
import { sequenceNumber } from './sequence-number.ts'
import { Usage } from './usage.ts'

const hex = (bytes: Uint8Array) => [...bytes].map((byte) => byte.toString(16).toUpperCase().padStart(2, '0')).join(' ')
const ownWords: Record<string, string> = { checksum: 'checksum', 'layout-id': 'layout id', release: 'release number', parameter: 'reserved bits' }

/** Register addresses as the map writes them: two digits at 8 bit, four at 16. */
const addressIn = (schema: ParameterSchema) => (address: number) => `0x${address.toString(16).toUpperCase().padStart(schema.image.addressWidth / 4, '0')}`

const told = (value: ParameterValue | undefined, unit: string | null) => (value === undefined ? 'no value' : `${value}${unit ? ` ${unit}` : ''}`)

function differenceLines(schema: ParameterSchema, d: WordDifference): string[] {
  const at = addressIn(schema)(d.address)
  const bytes = `bytes ${hex(d.found)}, expected ${hex(d.expected)}`
  if (d.parameters.length === 0) return [`differs: ${at} ${ownWords[d.kind]}: ${bytes}`]
  return d.parameters.map((p) => `differs: ${at} ${p.parameter} (${p.title}): ${told(p.found, p.unit)}, expected ${told(p.expected, p.unit)}; ${bytes}`)
}

/** Every value that the dump holds, telemetry after the set's own. */
function valueLines(schema: ParameterSchema, read: ReadBack & { kind: 'equal' | 'differs' }): string[] {
  const line = (name: string, value: ParameterValue, note: string) => {
    const parameter = schema.byName.get(name)!
    return `${addressIn(schema)(parameter.register!.address)} ${name}: ${told(value, parameter.unit)}${note}`
  }
  return [...Object.entries(read.values).map(([n, v]) => line(n, v, '')), ...Object.entries(read.telemetry).map(([n, v]) => line(n, v, ' (read only)'))]
}

/**
 * Decodes a read-back dump; against a file, names every register that differs in units and bytes, and every byte that no register explains.
 *
 * Exit code 0: equal, or (without a file) decoded and sound; 1: it differs, is incomplete, or holds what makes no sense.
 */
export async function readback(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { schema: { type: 'string' }, against: { type: 'string' }, joint: { type: 'string' }, format: { type: 'string' }, release: { type: 'string' } } })
  if (positionals.length !== 1 || !values.schema) throw new Usage('readback takes one dump and the parameter schema it is read by.')
  const release = sequenceNumber(values.release)
  const schema = readSchemaFile(values.schema).schema
  const dump = readDumpFile(positionals[0], values.format, schema)
  const expected = values.against === undefined ? dump.image : expectedImage(values.against, { schema, joint: values.joint, release, dump })
  const read = compareReadBack(schema, dump, expected)
  if (read.kind === 'incomplete') {
    process.stdout.write(`incomplete: ${read.message}\n${read.missing.map((m) => `missing: ${addressIn(schema)(m.address)}, ${m.bytes} bytes${m.parameters.length > 0 ? `: ${m.parameters.join(', ')}` : ''}`).join('\n')}\n`)
    return 1
  }
  const lines = [
    ...(values.against === undefined ? valueLines(schema, read) : read.differences.flatMap((d) => differenceLines(schema, d))),
    ...read.unexplained.map((u) => `unexplained: ${addressIn(schema)(u.address)}, ${u.bytes.length} bytes: ${hex(u.bytes)}`),
    ...read.findings.map((f) => `finding: ${f.message}`),
    ...(read.release === null ? [] : [`release number ${read.release}`]),
  ]
  const count = read.differences.length
  const verdict = values.against === undefined ? `decoded, ${read.findings.length} findings` : count === 0 ? `equal to ${values.against}` : `${count} ${count === 1 ? 'register differs' : 'registers differ'} from ${values.against}`
  process.stdout.write(`${[...lines, verdict].join('\n')}\n`)
  return count + read.unexplained.length + read.findings.length === 0 ? 0 : 1
}
