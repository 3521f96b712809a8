import { spawnSync } from 'node:child_process'
import { readFileSync } from 'node:fs'
import { brotliCompressSync } from 'node:zlib'
import { beforeAll, describe, expect, it } from 'vitest'

interface Chunk {
  file: string
  imports?: string[]
  dynamicImports?: string[]
  css?: string[]
}
type Manifest = Record<string, Chunk>

/** JavaScript of the first load, as it is sent (Brotli). */
const budgetBytes = 130_000

const client = new URL('../../.build/client/', import.meta.url)
const bytesOf = (file: string) => brotliCompressSync(readFileSync(new URL(file, client))).length
let manifest: Manifest

/** A chunk and what it imports, without what it fetches later. */
function withImports(key: string, found = new Set<string>()): Set<string> {
  if (found.has(key)) return found
  found.add(key)
  for (const next of manifest[key].imports ?? []) withImports(next, found)
  return found
}

const firstLoad = (route: string) => new Set([...withImports('index.html'), ...withImports(route)])

beforeAll(() => {
  // `npm test` has built it already; alone, this file builds what is out of date.
  expect(spawnSync(process.execPath, ['server/launch.mjs', '--build-only'], { stdio: ['ignore', 'inherit', 'inherit'] }).status).toBe(0)
  manifest = JSON.parse(readFileSync(new URL('.vite/manifest.json', client), 'utf8')) as Manifest
}, 180_000)

describe('the first load', () => {
  it('of the desk stays within its budget', () => {
    const files = [...firstLoad('src/routes/desk.tsx')].map((key) => ({ file: manifest[key].file, bytes: bytesOf(manifest[key].file) }))
    const total = files.reduce((n, f) => n + f.bytes, 0)
    expect(total, JSON.stringify(files.sort((a, b) => b.bytes - a.bytes).slice(0, 8))).toBeLessThanOrEqual(budgetBytes)
  })

  it('of every page but the editor and the charts holds neither Monaco nor uPlot', () => {
    const heavy = Object.entries(manifest).filter(([, c]) => /monaco/.test(c.file) || readFileSync(new URL(c.file, client), 'utf8').includes('uplot')).map(([key]) => key)
    expect(heavy.length).toBeGreaterThan(0)
    for (const page of ['desk', 'changes', 'releases', 'boards', 'ledger', 'machines', 'sign-in', 'bench']) for (const key of firstLoad(`src/routes/${page}.tsx`)) expect(heavy, `${page}: ${key}`).not.toContain(key)
  })
})
