import { writeFileSync } from 'node:fs'
import { parseArgs } from 'node:util'
import { EXPORT_FORMATS, isExportFormat, writeExport } from '../exports/export-file.ts'
import { splitFirmwareName } from '../modules/firmware/firmware-authors.ts'
import { resolveJoint } from '../modules/checks/resolve-joint.ts'
import { TOOL_VERSION } from '../tool-version.ts'
import { readSetFile } from './read-set-file.ts'
import { sequenceNumber } from './sequence-number.ts'
import { Usage } from './usage.ts'

/** Writes the register image of one joint of a file. */
export async function image(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { format: { type: 'string' }, out: { type: 'string' }, joint: { type: 'string' }, release: { type: 'string' }, schemas: { type: 'string' } } })
  const { format = '', out } = values
  if (positionals.length !== 1 || !out) throw new Usage('image takes one file, a format and a path to write to.')
  if (!isExportFormat(format)) throw new Usage(`--format takes ${EXPORT_FORMATS.join(', ')}.`)
  const sequence = sequenceNumber(values.release) ?? 0
  const { set, schemas } = readSetFile(positionals[0], values.schemas)
  const joints = Object.keys(set.joints)
  const joint = values.joint ?? (joints.length === 1 ? joints[0] : undefined)
  if (joint === undefined || !joints.includes(joint)) throw new Usage(`${joint === undefined ? 'Say which joint with --joint' : `There is no joint "${joint}"; --joint takes one of`}: ${joints.join(', ')}.`)
  const resolved = resolveJoint(set, joint, schemas, sequence)
  if (resolved.kind === 'refused') throw new Error(resolved.problems.map((p) => `${p.pointer}: ${p.detail}`).join('\n'))
  const { firmware, address } = set.joints[joint]
  const status = sequence === 0 ? ({ kind: 'unreleased' } as const) : ({ kind: 'release', version: String(sequence), sequence } as const)
  const file = writeExport(format, resolved.schema, resolved.encoded, { machine: 'set', joint, firmware: splitFirmwareName(firmware), status, device: address, toolVersion: TOOL_VERSION })
  try {
    writeFileSync(out, file.bytes)
  } catch (error) {
    throw new Error(`${out} can't be written (${(error as NodeJS.ErrnoException).code}). Name a file in a folder that you may write to.`)
  }
  return 0
}
