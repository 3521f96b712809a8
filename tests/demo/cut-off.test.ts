import { existsSync, mkdirSync, mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, expect, it } from 'vitest'
import { clearCutOff, underMark } from '../../server/demo/cut-off.ts'

let folder: string
const places = () => ({ database: join(folder, 'detent.sqlite'), files: join(folder, 'files') })
const noSql = () => Promise.resolve()
/** What a start leaves: a database with its log, a stored file, the keys. */
const fill = () => {
  mkdirSync(places().files)
  for (const name of ['detent.sqlite', 'detent.sqlite-wal', 'files/ab12', 'workplace.key']) writeFileSync(join(folder, name), 'x')
}

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'detent-cut-off-'))
})
afterEach(() => rmSync(folder, { recursive: true, force: true }))

it('takes a demo away that was cut off while it was made, and makes it anew; the keys stay', async () => {
  await expect(underMark(folder, noSql, () => (fill(), Promise.reject(new Error('ended meanwhile'))))).rejects.toThrow('ended meanwhile')
  clearCutOff(folder, places())
  expect(readdirSync(folder)).toEqual(['workplace.key'])
})

it('leaves a finished demo, and what was never a demo, alone', async () => {
  const asked: string[] = []
  await underMark(folder, async (sql) => void asked.push(sql), async () => fill())
  expect(asked).toEqual(['pragma synchronous = off', 'pragma synchronous = full', 'pragma wal_checkpoint(truncate)'])
  clearCutOff(folder, places())
  expect(existsSync(places().database)).toBe(true)
  expect(readdirSync(folder)).toEqual(['detent.sqlite', 'detent.sqlite-wal', 'files', 'workplace.key'])
})
