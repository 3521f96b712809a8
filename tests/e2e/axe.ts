import { createRequire } from 'node:module'
import { readFileSync } from 'node:fs'
import type { Page } from 'playwright-core'

const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8')
const rules = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa']

/** Faults of the page as it stands, in both themes, by axe-core's rules for WCAG 2.2 A and AA. */
export async function faultsOf(page: Page, name: string): Promise<string[]> {
  const found: string[] = []
  for (const colorScheme of ['light', 'dark'] as const) {
    await page.emulateMedia({ colorScheme, reducedMotion: 'reduce' })
    // Chromium brings a new theme's colours to parts that a container query sizes up to a quarter of a second late.
    await page.waitForTimeout(500)
    await page.evaluate(axe)
    const faults = await page.evaluate(async (tags) => {
      const { run } = (window as unknown as { axe: { run(root: Document, options: object): Promise<{ violations: { id: string; nodes: { target: unknown[]; failureSummary?: string }[] }[] }> } }).axe
      return (await run(document, { runOnly: tags })).violations.flatMap((v) => v.nodes.map((n) => `${v.id}: ${String(n.target[0])} ${n.failureSummary ?? ''}`))
    }, rules)
    found.push(...faults.map((f) => `${name}, ${colorScheme}: ${f}`))
  }
  return found
}
