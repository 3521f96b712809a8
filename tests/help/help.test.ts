import { readdirSync, readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { figureHelp } from '../../shared/help/figure-help.ts'
import { findHelp, helpGroups } from '../../shared/help/find-help.ts'
import { findingHelp } from '../../shared/help/finding-help.ts'
import { ROLES } from '../../shared/registers/roles.ts'

const file = (path: string) => readFileSync(new URL(`../../${path}`, import.meta.url), 'utf8')
const findings = 'server/modules/checks/findings'

/** Every kind of finding that the check can write, read from the functions that write them. */
function kindsWritten(): string[] {
  const source = readdirSync(new URL(`../../${findings}`, import.meta.url)).map((name) => file(`${findings}/${name}`)).join('\n') + file('server/modules/checks/assemble-check.ts')
  const literal = [...source.matchAll(/\bkind: '([^']+)', (?:loop|level|value|limit|unit|source|pointer)/g), ...source.matchAll(/against\('([^']+)'/g), ...source.matchAll(/noAnalysis\([^)]*'([a-z ]+)'\)/g), ...source.matchAll(/kind = '([^']+)'/g)].map((m) => m[1])
  // the margins' kinds are nominal and, with a word before, worst
  const margins = [...source.matchAll(/kind: '(\w+ margin)'/g)].flatMap((m) => [m[1], `worst ${m[1]}`])
  return [...new Set([...literal, ...margins])]
}

describe('the help', () => {
  it('explains every role of a parameter', () => {
    for (const role of ROLES) expect(findHelp(`role:${role}`), role).not.toBeNull()
  })

  it('explains every finding that the check can write, and none that it does not', () => {
    const kinds = kindsWritten()
    expect(kinds.length).toBeGreaterThan(30)
    for (const kind of kinds) expect(findHelp(`finding:${kind}`), kind).not.toBeNull()
    expect(Object.keys(findingHelp).filter((k) => !kinds.includes(k) && k !== 'value')).toEqual([])
    expect(findHelp('finding:value velocityGain')).toBe(findingHelp.value)
  })

  it('explains every figure of the panel and of the step', () => {
    const panel = [...file('src/features/checks/figures.ts').matchAll(/\{ name: '([^']+)', brief/g)].map((m) => m[1])
    const step = [...file('src/features/checks/components/step-metrics.tsx').matchAll(/\{ name: '([^']+)', unit/g)].map((m) => m[1])
    expect([panel.length, step.length].every((n) => n >= 4)).toBe(true)
    for (const figure of [...panel, ...step]) expect(figureHelp[figure], figure).toBeDefined()
  })

  it('gives each a title, a sentence that ends, and a source; what was recalled says so', () => {
    for (const { topics } of Object.values(helpGroups))
      for (const [key, topic] of Object.entries(topics)) {
        expect(topic.title, key).toMatch(/^[A-ZPρ]/)
        expect(topic.text, key).toMatch(/^.{20,400}\.$/)
        expect(topic.source.length, key).toBeGreaterThan(5)
        if (/Åström|Franklin|Buso|Peng|Peterchev/.test(topic.source)) expect(topic.source, key).toContain('(from memory)')
      }
  })

  it('is written with glyphs of the fonts that are shipped', () => {
    const ranges = [...file('src/styles/fonts.css').matchAll(/unicode-range: ([^;]+);/g)].flatMap((m) => m[1].split(',').map((r) => r.replace('U+', '').split('-').map((h) => Number.parseInt(h, 16))))
    const shipped = (c: string) => ranges.some(([from, to = from]) => c.codePointAt(0)! >= from && c.codePointAt(0)! <= to)
    for (const { topics } of Object.values(helpGroups)) for (const topic of Object.values(topics)) expect([...`${topic.title}${topic.text}${topic.formula ?? ''}${topic.source}`].filter((c) => !shipped(c)), topic.title).toEqual([])
  })

  it('has nothing to say about what it does not know', () => {
    for (const name of ['role:velocity.kd', 'finding:colour', 'figure:weight', 'velocity.kp']) expect(findHelp(name)).toBeNull()
  })
})
