import { readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { openBrowser } from './chromium.ts'
import { screens, show, signInAs } from './screens.ts'
const url = process.argv[2], folder = process.argv[3]
const only = process.argv.slice(4)
const axeSource = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8')
const browser = await openBrowser()
await browser.addInitScript(axeSource)
const page = browser.pages()[0]
let errors: string[] = []
page.on('pageerror', (e) => errors.push(e.message))
page.on('console', (m) => m.type() === 'error' && errors.push(m.text()))
let who: string | null | undefined
for (const [name, { by, at }] of Object.entries(screens).sort(([, a], [, b]) => String(a.by).localeCompare(String(b.by)))) {
  if (only.length && !only.includes(name)) continue
  if (by !== who) await signInAs(browser, url, by)
  who = by
  errors = []
  await page.emulateMedia({ colorScheme: 'light' })
  await page.setViewportSize({ width: 1440, height: 900 })
  const t = Date.now()
  await show(page, url + at).catch((e: Error) => console.log(name, 'SHOW', e.message.split('\n')[0]))
  const ms = Date.now() - t
  const run = (o: object) => page.evaluate(async (opt) => { const r = await (window as any).axe.run('body', { resultTypes: ['violations'], ...opt }); return r.violations.flatMap((v: any) => v.nodes.slice(0, 3).map((n: any) => v.id + ' ' + n.target.join(' ') + ' | ' + n.failureSummary.replaceAll('\n', ' ').slice(0, 160))) }, o).catch((e: Error) => [e.message])
  const a = await run({ runOnly: { type: 'tag', values: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'] } })
  await page.screenshot({ path: `${folder}/${name}-1440-light.png`, fullPage: true })
  await page.emulateMedia({ colorScheme: 'dark' })
  const d = await run({ runOnly: { type: 'rule', values: ['color-contrast'] } })
  const wide: string[] = []
  for (const w of [1440, 1024, 768, 720, 360, 320]) {
    await page.setViewportSize({ width: w, height: 900 })
    await page.evaluate(() => new Promise((r) => requestAnimationFrame(() => requestAnimationFrame(r))))
    const o = await page.evaluate(() => { const x = document.documentElement.scrollWidth - window.innerWidth; return x <= 0 ? null : x + ' ' + [...document.querySelectorAll('body *')].filter((e) => e.getBoundingClientRect().right > window.innerWidth + 1).slice(0, 3).map((e) => e.tagName + '.' + String(e.className).slice(0, 50)).join(' ; ') })
    if (o) wide.push(w + ': ' + o)
    if (w === 360) await page.screenshot({ path: `${folder}/${name}-360-dark.png`, fullPage: true })
    if (w === 768) await page.screenshot({ path: `${folder}/${name}-768-dark.png`, fullPage: true })
  }
  console.log(name, ms + 'ms', JSON.stringify({ a, d, wide, errors }, null, 0))
}
await browser.close()
