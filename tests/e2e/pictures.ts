import { mkdirSync } from 'node:fs'
import { join } from 'node:path'
import { openBrowser } from './chromium.ts'
import { show, signInAs } from './screens.ts'
import { startServer } from './server.ts'

/** Screens kept as pictures: who looks, where, and under which name. `npm run pictures` makes them anew from the demo workplace. */
const screens: [person: string, path: string, name: string, width?: number][] = [
  ['Mirela Castanho', '/', 'desk'],
  ['Mirela Castanho', '/changes/dunlin-12', 'change-unstable'],
  ['Hedda Lindqvist', '/changes/dunlin-11/review', 'change-review'],
  ['Hedda Lindqvist', '/changes/dunlin-11/check', 'change-check'],
  ['Yuna Brandt', '/machines/dunlin', 'machine'],
  ['Yuna Brandt', '/machines/dunlin/joints/r3-knee', 'joint'],
  ['Pascoe Adeyemi', '/machines/dunlin/releases/1.4.0', 'release'],
  ['Yuna Brandt', '/firmware/hinge/2.1.0', 'firmware-version'],
  ['Silvan Okoro', '/ledger', 'ledger'],
  ['Hedda Lindqvist', '/changes/dunlin-11/review', 'change-review-narrow', 360],
]

const folder = join('examples', 'pictures')
mkdirSync(folder, { recursive: true })
const server = await startServer()
try {
  for (const dark of [false, true])
    for (const [person, path, name, width = 1440] of screens) {
      const browser = await openBrowser({ width, height: width < 600 ? 740 : 1000, dark })
      await signInAs(browser, server.url, person)
      const page = browser.pages()[0]
      await show(page, `${server.url}${path}`)
      await page.waitForTimeout(800)
      await page.screenshot({ path: join(folder, `${name}${dark ? '-dark' : ''}.png`) })
      await browser.close()
    }
} finally {
  await server.stop()
}
