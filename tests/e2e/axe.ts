import { createRequire } from 'node:module'
import { readFileSync } from 'node:fs'
import type { Page } from 'playwright-core'

/** axe-core's own text, to be run in a page. */
export const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8')
const rules = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa']

/** Everything's colours, in one line. */
const colours = () => [...document.querySelectorAll('body *')].map((e) => `${getComputedStyle(e).color} ${getComputedStyle(e).backgroundColor}`).join()

/** Turns the page light or dark, and waits until its colours rest: the text editor and what a container query sizes take a new theme later than the rest. */
export async function showTheme(page: Page, colorScheme: 'light' | 'dark'): Promise<void> {
  await page.emulateMedia({ colorScheme, reducedMotion: 'reduce' })
  let before = ''
  for (let rested = 0, looks = 0; rested < 4 && looks < 40; looks += 1) {
    await page.waitForTimeout(200)
    const now = await page.evaluate(colours)
    rested = now === before ? rested + 1 : 0
    before = now
  }
}

/** Faults of the page as it stands, in both themes, by axe-core's rules for WCAG 2.2 A and AA. */
export async function faultsOf(page: Page, name: string): Promise<string[]> {
  const found: string[] = []
  for (const colorScheme of ['light', 'dark'] as const) {
    await showTheme(page, colorScheme)
    await page.evaluate(axe)
    const faults = await page.evaluate(async (tags) => {
      const { run } = (window as unknown as { axe: { run(root: Document, options: object): Promise<{ violations: { id: string; nodes: { target: unknown[]; failureSummary?: string }[] }[] }> } }).axe
      return (await run(document, { runOnly: tags })).violations.flatMap((v) => v.nodes.map((n) => `${v.id}: ${String(n.target[0])} ${n.failureSummary ?? ''}`))
    }, rules)
    found.push(...faults.map((f) => `${name}, ${colorScheme}: ${f}`))
  }
  return found
}
