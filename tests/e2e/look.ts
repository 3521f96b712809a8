import { mkdirSync, mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { openBrowser } from './chromium.ts'
import { screens, show, signInAs } from './screens.ts'
import { startServer } from './server.ts'

/**
 * Pictures of every screen to be looked at: `npx tsx tests/e2e/look.ts [screen …] [--width 360,1440] [--theme light,dark] [--at URL]`.
 * They go into a temporary folder whose name is printed.
 */
const words = process.argv.slice(2)
const option = (name: string, usual: string) => {
  const at = words.indexOf(`--${name}`)
  return at < 0 ? usual : words.splice(at, 2)[1]
}
const widths = option('width', '360,768,1024,1440').split(',').map(Number)
const themes = option('theme', 'light,dark').split(',')
const running = option('at', '')
const folder = option('to', '') || mkdtempSync(join(tmpdir(), 'detent-look-'))
mkdirSync(folder, { recursive: true })

const server = running ? { url: running, stop: async () => {} } : await startServer()
try {
  for (const theme of themes) {
    const browser = await openBrowser({ dark: theme === 'dark' })
    const page = browser.pages()[0]
    for (const [name, { by, at }] of Object.entries(screens)) {
      if (words.length > 0 && !words.includes(name)) continue
      await signInAs(browser, server.url, by)
      for (const width of widths) {
        await page.setViewportSize({ width, height: width < 600 ? 740 : 900 })
        await show(page, `${server.url}${at}`).catch((error: Error) => console.error(`${name} ${width}: ${error.message.split('\n')[0]}`))
        await page.waitForTimeout(250)
        await page.screenshot({ path: join(folder, `${name}-${width}-${theme}.png`), fullPage: true })
      }
    }
    await browser.close()
  }
} finally {
  await server.stop()
}
console.log(folder)
