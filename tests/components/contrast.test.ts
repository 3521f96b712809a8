import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'

// WCAG 2.2: relative luminance and contrast ratio as defined there (from memory); 1.4.3 asks 4.5 for text, 1.4.11 asks 3 for controls and graphics.
function luminance(hex: string): number {
  const [r, g, b] = [1, 3, 5].map((i) => {
    const c = Number.parseInt(hex.slice(i, i + 2), 16) / 255
    return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4
  })
  return 0.2126 * r + 0.7152 * g + 0.0722 * b
}

function contrast(a: string, b: string): number {
  const [hi, lo] = [luminance(a), luminance(b)].sort((x, y) => y - x)
  return (hi + 0.05) / (lo + 0.05)
}

const css = readFileSync(new URL('../../src/styles/tokens.css', import.meta.url), 'utf8')

function tokens(block: string): Record<string, string> {
  return Object.fromEntries([...block.matchAll(/--([a-z0-9-]+):\s*(#[0-9A-Fa-f]{6});/g)].map((m) => [m[1], m[2]]))
}

const light = tokens(css.slice(css.indexOf(':root {'), css.indexOf(":root[data-theme='dark']")))
const chosenDark = tokens(css.slice(css.indexOf(":root[data-theme='dark']"), css.indexOf('@media')))
const systemDark = tokens(css.slice(css.indexOf('@media')))

const COLOURS = ['brass', 'verdigris', 'oxide', 'plum', 'slate']
const TEXT: [string, string][] = [
  ...['ink', 'ink-2', ...COLOURS].flatMap((t): [string, string][] => [[t, 'paper'], [t, 'sheet']]),
  ...COLOURS.flatMap((c): [string, string][] => [['ink', `${c}-wash`], ['ink-2', `${c}-wash`], [c, `${c}-wash`], [c, 'brass-wash']]),
  ['on-brass', 'brass'], ['on-oxide', 'oxide'], ['paper', 'ink'],
]
const EDGES: [string, string][] = [['rule', 'paper'], ['rule', 'sheet'], ['brass', 'paper'], ['brass', 'sheet'], ['ink', 'map-1'], ['ink', 'map-2'], ['ink', 'map-3']]

describe('contrast of the tokens', () => {
  it('measures black on white as 21 and a colour on itself as 1', () => {
    expect(contrast('#000000', '#FFFFFF')).toBeCloseTo(21, 10)
    expect(contrast('#8A6420', '#8A6420')).toBe(1)
  })

  it('has the same dark by choice and by system, and the same names as light', () => {
    expect(systemDark).toEqual(chosenDark)
    expect(Object.keys(chosenDark)).toEqual(Object.keys(light))
    expect(Object.keys(light).length).toBeGreaterThanOrEqual(23)
  })

  for (const [theme, t] of Object.entries({ light, dark: chosenDark })) {
    it.each(TEXT)(`${theme}: text %s on %s`, (ink, ground) => expect(contrast(t[ink], t[ground])).toBeGreaterThanOrEqual(4.5))
    it.each(EDGES)(`${theme}: edge %s on %s`, (ink, ground) => expect(contrast(t[ink], t[ground])).toBeGreaterThanOrEqual(3))
    it(`${theme}: the pressed and hovered primary button keeps its words readable`, () => {
      const mix = (share: number) => {
        const at = (hex: string, i: number) => Number.parseInt(hex.slice(i, i + 2), 16)
        return `#${[1, 3, 5].map((i) => Math.round(at(t.brass, i) * share + at(t.ink, i) * (1 - share)).toString(16).padStart(2, '0')).join('')}`
      }
      for (const share of [0.88, 0.78]) expect(contrast(t['on-brass'], mix(share))).toBeGreaterThanOrEqual(4.5)
    })
  }
})
