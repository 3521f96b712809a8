import { existsSync, readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'

const root = new URL('../', import.meta.url)
const text = readFileSync(new URL('server/SECURITY.md', root), 'utf8')

/**
 * Every requirement of levels 1 and 2 of OWASP ASVS 5.0.0: section and the last part of the number. Read in the standard's own table,
 * 5.0/docs_en/OWASP_Application_Security_Verification_Standard_5.0.0_en.csv of github.com/OWASP/ASVS; chapters 10 and 17 are left out as wholes.
 */
const required = `
1.1 1-2; 1.2 1-9; 1.3 1-11; 1.4 1-3; 1.5 1-2
2.1 1-3; 2.2 1-3; 2.3 1-4; 2.4 1
3.2 1-2; 3.3 1-4; 3.4 1-6; 3.5 1-5; 3.7 1-2
4.1 1-3; 4.2 1; 4.3 1-2; 4.4 1-4
5.1 1; 5.2 1-3; 5.3 1-2; 5.4 1-3
6.1 1-3; 6.2 1-12; 6.3 1-4; 6.4 1-4; 6.5 1-5; 6.6 1-3; 6.8 1-4
7.1 1-3; 7.2 1-4; 7.3 1-2; 7.4 1-5; 7.5 1-2; 7.6 1-2
8.1 1-2; 8.2 1-3; 8.3 1; 8.4 1
9.1 1-3; 9.2 1-4
11.1 1-2; 11.2 1-3; 11.3 1-3; 11.4 1-4; 11.5 1; 11.6 1
12.1 1-3; 12.2 1-2; 12.3 1-4
13.1 1; 13.2 1-5; 13.3 1-2; 13.4 1-5
14.1 1-2; 14.2 1-4; 14.3 1-3
15.1 1-3; 15.2 1-3; 15.3 1-7
16.1 1; 16.2 1-5; 16.3 1-4; 16.4 1-3; 16.5 1-3`
  .split(/[;\n]/)
  .flatMap((part) => {
    const match = /^\s*(\d+\.\d+) (\d+)(?:-(\d+))?\s*$/.exec(part)
    if (!match) return []
    const [, section, from, to = from] = match
    return Array.from({ length: Number(to) - Number(from) + 1 }, (_, i) => `${section}.${Number(from) + i}`)
  })

const rows = [...text.matchAll(/^\| (\d+\.\d+\.\d+) \| (.*) \| (.*) \| (.*) ?\|$/gm)]
const outside = text.slice(text.indexOf('Not applicable, because')).match(/\d+\.\d+\.\d+/g) ?? []

describe('the table of requirements', () => {
  it('names every one of levels 1 and 2 once: met, not met, or not applicable', () => {
    const named = [...rows.map((r) => r[1]), ...outside]
    expect(named.filter((n, i) => named.indexOf(n) !== i)).toEqual([])
    expect([...named].sort()).toEqual([...required].sort())
  })

  it('says for each where it is met, or that it is not', () => {
    for (const [, number, asks, met] of rows) {
      expect(asks.length, number).toBeGreaterThan(5)
      expect(met.trim().length, number).toBeGreaterThan(3)
    }
  })

  it('points at files that are there', () => {
    const files = [...text.matchAll(/`((?:server|tests|src|shared|schemas)\/[\w./-]+)`/g)].map((m) => m[1])
    expect(files.length).toBeGreaterThan(150)
    for (const file of new Set(files)) expect(existsSync(new URL(file, root)), file).toBe(true)
  })

  it('hides nothing that is not met', () => {
    const open = rows.filter(([, , , met]) => met.includes('**not met**') || met.includes('**in part**')).map((r) => r[1])
    expect(open).toEqual(['5.4.3', '6.2.4', '6.2.12', '6.3.3', '7.4.5', '7.5.2', '12.3.1', '13.3.1', '14.2.1', '14.3.1', '16.3.3', '16.4.3'])
  })
})
