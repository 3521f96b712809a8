import { writeFileSync } from 'node:fs'
import { parseArgs } from 'node:util'
import { intelHex } from '../exports/intel-hex.ts'
import { resolveJoint } from '../modules/checks/resolve-joint.ts'
import { readSetFile } from './read-set-file.ts'
import { Usage } from './usage.ts'

/** Writes the register image of one joint of a file. */
export async function image(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { format: { type: 'string' }, out: { type: 'string' }, joint: { type: 'string' }, release: { type: 'string' }, schemas: { type: 'string' } } })
  const { format, out } = values
  if (positionals.length !== 1 || !out || (format !== 'bin' && format !== 'hex')) throw new Usage('image takes one file, a format and a path to write to.')
  const release = Number(values.release ?? 0)
  if (!Number.isInteger(release) || release < 0) throw new Usage('--release takes a sequence number.')
  const { set, schemas } = readSetFile(positionals[0], values.schemas)
  const joints = Object.keys(set.joints)
  const joint = values.joint ?? (joints.length === 1 ? joints[0] : undefined)
  if (joint === undefined || !joints.includes(joint)) throw new Usage(`Say which joint with --joint: ${joints.join(', ')}.`)
  const resolved = resolveJoint(set, joint, schemas, release)
  if (resolved.kind === 'refused') throw new Error(resolved.problems.map((p) => `${p.pointer}: ${p.detail}`).join('\n'))
  const bytes = format === 'bin' ? resolved.encoded.image : intelHex(resolved.schema, resolved.encoded.image)
  writeFileSync(out, bytes)
  return 0
}
