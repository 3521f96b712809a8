import { mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { openBrowser } from './chromium.ts'
import { screens, signInAs } from './screens.ts'
import { startServer } from './server.ts'

/**
 * How soon, how steadily and how promptly pages show: LCP, CLS and INP in Chromium, with an empty cache, on the demo workplace or on a
 * filled one: `npx tsx tests/e2e/vitals.ts [--large] [screen …]`.
 *
 * LCP: largest contentful paint, ms after the navigation began. CLS: sum of the layout shifts that no input caused. INP: the longest from
 * an input to the next frame over some twenty keys and presses. By the browser's own entries (W3C Largest Contentful Paint, Layout
 * Instability, Event Timing).
 */
export interface Vitals {
  screen: string
  lcpMs: number
  cls: number
  inpMs: number
}

const observe = () => {
  const seen = { lcp: 0, cls: 0, inp: 0 }
  Object.assign(window, { seen })
  new PerformanceObserver((list) => list.getEntries().forEach((e) => (seen.lcp = e.startTime))).observe({ type: 'largest-contentful-paint', buffered: true })
  new PerformanceObserver((list) => list.getEntries().forEach((e) => {
    const shift = e as PerformanceEntry & { value: number; hadRecentInput: boolean }
    if (!shift.hadRecentInput) seen.cls += shift.value
  })).observe({ type: 'layout-shift', buffered: true })
  new PerformanceObserver((list) => list.getEntries().forEach((e) => (seen.inp = Math.max(seen.inp, (e as PerformanceEventTiming).interactionId ? e.duration : 0)))).observe({ type: 'event', buffered: true, durationThreshold: 16 } as PerformanceObserverInit)
}

const measured = ['desk', 'changes', 'releases', 'boards', 'ledger', 'machine', 'joint', 'change', 'changeReview', 'changeCheck', 'release', 'firmwareVersion', 'search'] as const

/** Each screen once, in a new profile, so that nothing is cached; then keys and presses that every page takes. */
export async function vitals(url: string, names: readonly (keyof typeof screens)[] = measured): Promise<Vitals[]> {
  const found: Vitals[] = []
  for (const name of names) {
    const browser = await openBrowser()
    const page = browser.pages()[0]
    await signInAs(browser, url, screens[name].by)
    await page.addInitScript(observe)
    await page.goto(`${url}${screens[name].at}`, { waitUntil: 'load' })
    await page.waitForFunction(() => document.querySelector('h1') !== null && document.querySelector('.waiting') === null, undefined, { timeout: 30_000 })
    await page.waitForTimeout(600)
    const first = await page.evaluate(() => ({ ...(window as unknown as { seen: { lcp: number; cls: number } }).seen }))
    for (let i = 0; i < 8; i += 1) await page.keyboard.press('Tab')
    await page.keyboard.press('/')
    await page.keyboard.type('knee')
    for (const key of ['ArrowDown', 'ArrowDown', 'ArrowUp', 'Escape', 'Escape']) await page.keyboard.press(key)
    await page.mouse.wheel(0, 4000)
    await page.getByRole('button', { name: /^person/ }).click()
    await page.keyboard.press('Escape')
    await page.waitForTimeout(300)
    const inp = await page.evaluate(() => (window as unknown as { seen: { inp: number } }).seen.inp)
    found.push({ screen: name, lcpMs: Math.round(first.lcp), cls: Number(first.cls.toFixed(4)), inpMs: Math.round(inp) })
    await browser.close()
  }
  return found
}

if (process.argv[1]?.endsWith('vitals.ts')) {
  const words = process.argv.slice(2)
  const at = words.find((w) => w.startsWith('http'))
  const large = words.includes('--large')
  const names = words.filter((w): w is keyof typeof screens => w in screens)
  const dataDir = mkdtempSync(join(tmpdir(), 'detent-vitals-'))
  if (large) {
    const { fillLarge } = await import('./large-workplace.ts')
    await fillLarge(dataDir)
  }
  const server = at ? { url: at, stop: async () => {} } : await startServer({ DETENT_DATA: dataDir })
  try {
    console.table(await vitals(server.url, names.length > 0 ? names : measured))
  } finally {
    await server.stop()
  }
}
