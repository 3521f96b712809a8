import { parseArgs } from 'node:util'
import { KIT_LIMITS } from '../exports/read-zip.ts'
import { verifyKit } from '../exports/verify-kit.ts'
import { readBytes } from './read-bytes.ts'
import { readTextFile } from './read-set-file.ts'
import { Usage } from './usage.ts'

/** Proves a release kit without network or database. Exit code 0: every signature and every file holds; 1: something does not. */
export async function kit(args: string[]): Promise<number> {
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options: { key: { type: 'string' } } })
  const [act, file] = positionals
  if (act !== 'verify' || positionals.length !== 2) throw new Usage('kit takes the word verify and one kit.')
  const key = values.key === undefined ? null : readTextFile(values.key)
  const result = verifyKit(readBytes(file, KIT_LIMITS.packed), key)
  if (result.kind === 'refused') {
    process.stdout.write(`${result.problems.map((p) => `does not hold: ${p}`).join('\n')}\n`)
    return 1
  }
  const { machine, version, sequence, files } = result.release
  process.stdout.write(`verified: ${machine} ${version}, release number ${sequence}, ${files} files\nsigned by key ${result.keyId}\n`)
  if (!result.keyTrusted) process.stdout.write("The kit's own key was used: it is whole, but this does not prove whose it is. Compare the key with the workplace's keys page, or give it with --key.\n")
  return 0
}
