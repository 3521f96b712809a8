import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll } from 'vitest'

/** A new empty folder, gone after the file's tests. */
export function aFolder(): string {
  const folder = mkdtempSync(join(tmpdir(), 'detent-test-'))
  afterAll(() => rmSync(folder, { recursive: true, force: true }))
  return folder
}
