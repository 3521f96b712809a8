import { isObject } from '../../shared/registers/problem-list.ts'
import { readJsonText } from '../../shared/registers/json-text.ts'
import { decodeImage } from '../../shared/registers/decode-image.ts'
import { encodeImage } from '../../shared/registers/encode-image.ts'
import type { ParameterSchema, ParameterValues } from '../../shared/registers/parameter-schema.ts'
import type { DumpImage } from '../../shared/registers/read-back.ts'
import { readSet } from '../modules/changes/read-set.ts'
import { resolveJoint } from '../modules/checks/resolve-joint.ts'
import { readDumpFile } from './read-dump-file.ts'
import { readTextFile } from './read-set-file.ts'
import { Usage } from './usage.ts'

interface Against {
  schema: ParameterSchema
  joint: string | undefined
  /** sequence number that the board should hold; null takes the one in the dump */
  release: number | null
  dump: DumpImage
}

/** The sequence number in the dump's release register, as far as it was read. */
function numberIn(schema: ParameterSchema, dump: DumpImage): number {
  const register = schema.image.release
  if (!register) return 0
  const at = register.address - schema.image.base
  if (!dump.present.subarray(at, at + register.bytes).every((p) => p === 1)) return 0
  return decodeImage(schema, dump.image).release ?? 0
}

function encoded(file: string, schema: ParameterSchema, values: ParameterValues, release: number): Uint8Array {
  const result = encodeImage(schema, values, { release })
  if (result.kind === 'refused') throw new Error(result.problems.map((p) => `${file}: ${p.parameter}: ${p.message}`).join('\n'))
  return result.image
}

/** One joint of a machine set, by the schema given. */
function fromSet(file: string, text: string, { schema, joint: named, release, dump }: Against): Uint8Array {
  const read = readSet(text)
  if (!read.ok) throw new Error(read.problems.map((p) => `${file}:${p.line}:${p.column}: ${p.pointer ? `${p.pointer} ` : ''}${p.message}`).join('\n'))
  const joints = Object.keys(read.set.joints)
  const joint = named ?? (joints.length === 1 ? joints[0] : undefined)
  if (joint === undefined || !joints.includes(joint)) throw new Usage(`Say which joint with --joint: ${joints.join(', ')}.`)
  const resolved = resolveJoint(read.set, joint, new Map([[read.set.joints[joint].firmware, schema]]), release ?? numberIn(schema, dump))
  if (resolved.kind === 'refused') throw new Error(resolved.problems.map((p) => `${file}: ${p.pointer}: ${p.detail}`).join('\n'))
  return resolved.encoded.image
}

/** Values of Detent's own record of an image (its .json), as they were typed. */
function valuesOf(record: Record<string, unknown>): ParameterValues {
  const registers = Array.isArray(record.registers) ? (record.registers as unknown[]) : []
  return Object.fromEntries(registers.filter(isObject).filter((r) => typeof r.parameter === 'string').map((r) => [r.parameter as string, r.typed as ParameterValues[string]]))
}

/**
 * The image that a board should hold: of a joint of a machine set, of plain values by parameter name, of Detent's record of an image, or an
 * image itself (.bin, .hex, .srec, .csv).
 *
 * @throws Error saying what is wrong with the file; Usage when it holds several joints and none is named
 */
export function expectedImage(file: string, against: Against): Uint8Array {
  if (!/\.jsonc?$/i.test(file)) {
    const { image, present } = readDumpFile(file, undefined, against.schema)
    return image.map((byte, k) => (present[k] === 1 ? byte : against.schema.image.fill))
  }
  const text = readTextFile(file)
  const read = readJsonText(text)
  if (read.kind === 'refused') throw new Error(`${file}:${read.line}:${read.column}: ${read.message}`)
  if (!isObject(read.value)) throw new Error(`${file}: it holds no object.`)
  const value = read.value
  if (isObject(value.joints)) return fromSet(file, text, against)
  if (value.record === 'detent register image') {
    const number = isObject(value.image) && typeof value.image.releaseNumber === 'number' ? value.image.releaseNumber : 0
    return encoded(file, against.schema, valuesOf(value), against.release ?? number)
  }
  return encoded(file, against.schema, (isObject(value.values) ? value.values : value) as ParameterValues, against.release ?? numberIn(against.schema, against.dump))
}
