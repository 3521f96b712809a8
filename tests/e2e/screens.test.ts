import type { BrowserContext, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { faultsOf } from './axe.ts'
import { openBrowser } from './chromium.ts'
import { dialogs, screens, show, signInAs } from './screens.ts'
import { startServer, type RunningServer } from './server.ts'

let server: RunningServer
let browser: BrowserContext
let page: Page
let who: string | null = null
const errors: string[] = []

/** Elements that reach past the window's right edge and make the page scroll sideways. */
const overflow = () =>
  page.evaluate(() => {
    const wide = document.documentElement.scrollWidth - window.innerWidth
    if (wide <= 0) return []
    return [...document.querySelectorAll('body *')].filter((e) => e.getBoundingClientRect().right > window.innerWidth + 1).slice(0, 4).map((e) => `${wide} px: ${e.tagName.toLowerCase()}.${String(e.className).slice(0, 60)}`)
  })

async function widthsThat(widths: readonly number[]) {
  const found: string[] = []
  for (const width of widths) {
    await page.setViewportSize({ width, height: 900 })
    // One frame to lay out, one for what measures itself.
    await page.evaluate(() => new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done))))
    for (const o of await overflow()) found.push(`${width}: ${o}`)
  }
  return found
}

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser()
  page = browser.pages()[0]
  page.setDefaultTimeout(20_000)
  page.on('pageerror', (error) => errors.push(error.message))
  page.on('console', (message) => {
    // A refusal that the page shows (no session yet, a link nobody was sent) is told by the browser too.
    if (message.type() === 'error' && !/status of 40[14]/.test(message.text())) errors.push(message.text())
  })
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

async function open(by: string | null, at: string) {
  if (by !== who) await signInAs(browser, server.url, by)
  who = by
  errors.length = 0
  await page.emulateMedia({ colorScheme: 'light', reducedMotion: 'reduce' })
  await page.setViewportSize({ width: 1440, height: 900 })
  await show(page, `${server.url}${at}`)
}

describe('every screen', () => {
  // Sorted by reader, so that each signs in once.
  const list = Object.entries(screens).sort(([, a], [, b]) => String(a.by).localeCompare(String(b.by)))

  it.each(list)('%s: clean for axe in light and dark, within its width at 1440, 720 (200 % zoom), 360 and 320, no error', async (name, { by, at }) => {
    await open(by, at)
    expect(await faultsOf(page, name)).toEqual([])
    expect(await widthsThat([1440, 720, 360, 320])).toEqual([])
    expect(errors).toEqual([])
  })
})

describe('every dialog', () => {
  it.each(dialogs.map((d) => [`${d.press} on ${d.at}`, d] as const))('%s: clean for axe, closes on Esc and gives the focus back', async (_name, { by, at, press }) => {
    await open(by, at)
    const button = page.getByRole('button', { name: new RegExp(`^${press}`) }).first()
    await button.click()
    await page.locator('dialog[open]').waitFor()
    expect(await faultsOf(page, press)).toEqual([])
    await page.setViewportSize({ width: 360, height: 740 })
    expect(await overflow()).toEqual([])
    await page.keyboard.press('Escape')
    await page.locator('dialog[open]').waitFor({ state: 'detached' })
    expect(await button.evaluate((b) => b === document.activeElement)).toBe(true)
    expect(errors).toEqual([])
  })
})

describe('help and search, by keyboard in a real browser', () => {
  it('F1 in a field opens its explanation above everything; Esc gives the focus back', async () => {
    await open('Mirela Castanho', screens.change.at)
    const field = page.getByRole('textbox', { name: 'Speed gain', exact: true })
    await field.focus()
    await page.keyboard.press('F1')
    const dialog = page.getByRole('dialog', { name: 'Velocity gain' })
    await dialog.waitFor()
    expect(await faultsOf(page, 'help')).toEqual([])
    await page.keyboard.press('Escape')
    await dialog.waitFor({ state: 'detached' })
    expect(await page.evaluate(() => document.activeElement?.getAttribute('aria-label'))).toBe('what is Speed gain?')
  })

  it('/ R3 knee ↓ Enter leads to the joint', async () => {
    await open('Yuna Brandt', '/')
    await page.keyboard.press('/')
    await page.keyboard.type('r3 knee')
    await page.getByRole('option', { name: /^R3 knee/ }).first().waitFor()
    expect(await faultsOf(page, 'search')).toEqual([])
    await page.keyboard.press('ArrowDown')
    await page.keyboard.press('Enter')
    await page.waitForURL('**/machines/dunlin/joints/r3-knee')
  })
})

describe('motion', () => {
  it('is none where the reader asks for less', async () => {
    await open('Rafiq Sandoval', '/')
    const moving = await page.evaluate(() => [...document.querySelectorAll('*')].filter((e) => {
      const { animationDuration, animationName, transitionDuration } = getComputedStyle(e)
      const long = (d: string) => d.split(',').some((x) => Number.parseFloat(x) * (x.includes('ms') ? 1 : 1000) > 1)
      return (animationName !== 'none' && long(animationDuration)) || long(transitionDuration)
    }).length)
    expect(moving).toBe(0)
  })
})
