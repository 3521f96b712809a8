import { execFileSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'

/** Runs a reference tool; a missing one fails the test and says how to get it. */
export function run(command: string, args: readonly string[], input?: string | Uint8Array): Buffer {
  try {
    return execFileSync(command, args, { input, maxBuffer: 64e6, stdio: ['pipe', 'pipe', 'pipe'] })
  } catch (error) {
    const { code, stderr } = error as { code?: string; stderr?: Buffer }
    const missing = code === 'ENOENT' || stderr?.includes('No module named')
    if (missing) throw new Error(`${command} is needed by this test: apt-get install srecord python3-intelhex openssl`, { cause: error })
    throw error
  }
}

/** Runs `work` in a directory of its own, which is removed afterwards. */
export function inDirectory<T>(work: (path: (name: string) => string) => T): T {
  const directory = mkdtempSync(join(tmpdir(), 'detent-'))
  try {
    return work((name) => join(directory, name))
  } finally {
    rmSync(directory, { recursive: true, force: true })
  }
}

export const write = (path: string, content: string | Uint8Array): void => writeFileSync(path, content)
export const read = (path: string): Buffer => readFileSync(path)
