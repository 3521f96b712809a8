import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { dependencies, dependencyList, listFile } from './dependency-list.ts'

/** Licences that let the program be run and handed on with its parts as they are (common practice; MPL-2.0 asks for its own files' sources alone). */
const taken = new Set(['MIT', 'MIT-0', 'ISC', '0BSD', 'BSD-2-Clause', 'BSD-3-Clause', 'Apache-2.0', 'BlueOak-1.0.0', 'CC0-1.0', 'Zlib', 'WTFPL', 'Unlicense', 'Python-2.0', 'OFL-1.1', 'CC-BY-4.0', 'MPL-2.0'])

const terms = (licence: string) => licence.replaceAll(/[()]/g, '').split(/ OR | AND /)

describe('the list of dependencies', () => {
  it('is what the lock file holds', () => expect(readFileSync(listFile, 'utf8'), 'run: npx tsx tests/dependency-list.ts').toBe(dependencyList()))

  it('names a licence for each, and one that is taken', () => {
    const all = dependencies()
    expect(all.length).toBeGreaterThan(300)
    for (const d of all) expect(terms(d.licence).every((t) => taken.has(t)), `${d.name} ${d.version}: ${d.licence}`).toBe(true)
  })

  it('has an integrity hash for each, and none from elsewhere than the registry', () => {
    const { packages } = JSON.parse(readFileSync(new URL('../package-lock.json', import.meta.url), 'utf8')) as { packages: Record<string, { resolved?: string; integrity?: string; link?: boolean; inBundle?: boolean }> }
    const hosts = new Set<string>()
    for (const [path, p] of Object.entries(packages)) {
      if (path === '') continue
      // what comes inside another package is covered by that one's hash
      if (!p.inBundle) expect(p.integrity, path).toMatch(/^sha512-/)
      expect(p.link, path).toBeUndefined()
      if (p.resolved) hosts.add(new URL(p.resolved).host)
    }
    expect(hosts.size).toBeLessThanOrEqual(1)
  })
})
