import { parseArgs } from 'node:util'
import { runCases } from '../control/cases.ts'
import { readTextFile } from './read-set-file.ts'
import { Usage } from './usage.ts'

/** Runs a file of control cases through the code the server uses; a line for each figure that falls short. */
export async function cases(args: string[]): Promise<number> {
  const { positionals } = parseArgs({ args, allowPositionals: true, options: {} })
  if (positionals.length !== 1) throw new Usage('cases takes one file.')
  const { lines, passed, failed } = runCases(JSON.parse(readTextFile(positionals[0])))
  for (const line of lines) process.stdout.write(`${line}\n`)
  process.stdout.write(`${passed} passed, ${failed} failed\n`)
  return failed === 0 ? 0 : 1
}
