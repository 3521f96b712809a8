import { Secret, TOTP } from 'otpauth'
import type { BrowserContext, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { demoSignIns } from '../../server/modules/people/demo-sign-ins.ts'
import { faultsOf } from './axe.ts'
import { openBrowser } from './chromium.ts'
import { startServer, type RunningServer } from './server.ts'

let server: RunningServer
let browser: BrowserContext
let page: Page
let secret: string
let codes: string[]
const errors: string[] = []

const rafiq = demoSignIns.find((d) => d.name === 'Rafiq Sandoval')!
const silvan = demoSignIns.find((d) => d.name === 'Silvan Okoro')!

/** An authenticator app. `ahead`: of the next step, which is taken too, so that a code is fresh without waiting for the clock. */
const codeNow = ({ ahead = 0 } = {}) => TOTP.generate({ secret: Secret.fromBase32(secret.replaceAll(/\s/g, '')), timestamp: Date.now() + ahead * 30_000 })

/** What the keyboard is on, by its words. */
const focused = () =>
  page.evaluate(() => {
    const at = document.activeElement as HTMLElement | null
    return at ? (at.getAttribute('aria-label') ?? (at as HTMLInputElement).labels?.[0]?.textContent ?? at.textContent ?? '').trim() : ''
  })

/** Walks with the Tab key alone to what bears these words. */
async function tabTo(words: string) {
  for (let n = 0; n < 80; n += 1) {
    if ((await focused()).startsWith(words)) return
    await page.keyboard.press('Tab')
  }
  throw new Error(`80 presses of Tab did not come to "${words}"; the keyboard is on "${await focused()}"`)
}

async function enterPassword(email: string, password: string) {
  await page.getByRole('textbox', { name: 'E-mail' }).fill(email)
  await page.getByRole('textbox', { name: 'Password' }).fill(password)
  await page.keyboard.press('Enter')
}

async function signOut() {
  await browser.clearCookies()
  await page.goto(`${server.url}/sign-in`)
}

/** A session of the same person elsewhere, as another computer would open it. */
async function elsewhere(code: string) {
  const json = { 'Content-Type': 'application/json' }
  const first = await fetch(`${server.url}/api/session`, { method: 'POST', headers: json, body: JSON.stringify({ email: rafiq.email, password: rafiq.password }) })
  expect(await first.json()).toEqual({ signedIn: false })
  const second = await fetch(`${server.url}/api/session/code`, { method: 'POST', headers: { ...json, Cookie: first.headers.getSetCookie()[0].split(';')[0] }, body: JSON.stringify({ code }) })
  expect(await second.json()).toEqual({ signedIn: true })
  const cookie = second.headers.getSetCookie()[0].split(';')[0]
  return async () => (await fetch(`${server.url}/api/me`, { headers: { Cookie: cookie } })).status
}

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser()
  page = browser.pages()[0]
  page.setDefaultTimeout(10_000)
  page.on('pageerror', (error) => errors.push(error.message))
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

describe('a second factor, in a browser', () => {
  it('is set up by keyboard alone, recovery codes and all', async () => {
    await page.goto(`${server.url}/sign-in`)
    await page.getByText('The demo asks for no second factor.').waitFor()
    await enterPassword(rafiq.email, rafiq.password)
    await page.waitForURL(`${server.url}/`)
    await page.goto(`${server.url}/account`)
    await page.getByRole('heading', { name: 'Second factor' }).waitFor()
    await tabTo('Set up a second factor')
    await page.keyboard.press('Enter')
    await page.getByRole('dialog', { name: 'Set up a second factor' }).waitFor()
    await tabTo('Your password')
    await page.keyboard.type(rafiq.password)
    await page.keyboard.press('Enter')
    await page.getByRole('img', { name: /QR code/ }).waitFor()
    secret = (await page.getByRole('status', { name: 'Secret' }).textContent())!
    expect(secret).toMatch(/^([A-Z2-7]{4} ){7}[A-Z2-7]{4}$/)
    await tabTo('Code')
    await page.keyboard.type('000000')
    await page.keyboard.press('Enter')
    await page.getByText('is wrong', { exact: true }).waitFor()
    await tabTo('Code')
    await page.keyboard.type(codeNow())
    await page.keyboard.press('Enter')
    const list = page.getByRole('list', { name: 'recovery codes' })
    await list.waitFor()
    codes = await list.getByRole('listitem').allTextContents()
    expect(codes).toHaveLength(10)
    await page.keyboard.press('Escape')
    expect(await list.isVisible()).toBe(true)
    await tabTo('I have kept them')
    await page.keyboard.press('Space')
    await tabTo('Done')
    await page.keyboard.press('Enter')
    await page.getByText('10 recovery codes left').waitFor()
  })

  it('is asked for after the password, and signs in by its code', async () => {
    await signOut()
    await enterPassword(rafiq.email, rafiq.password)
    await page.getByText('the password was right').waitFor()
    expect(await focused()).toBe('Code')
    expect((await page.request.get(`${server.url}/api/me`)).status()).toBe(401)
    await page.keyboard.type(codeNow({ ahead: 1 }))
    await page.keyboard.press('Enter')
    await page.waitForURL(`${server.url}/`)
  })

  it('is replaced by a recovery code, once', async () => {
    await signOut()
    await enterPassword(rafiq.email, rafiq.password)
    await page.getByRole('textbox', { name: 'Code' }).fill(codes[0])
    await page.keyboard.press('Enter')
    await page.waitForURL(`${server.url}/`)
    await page.goto(`${server.url}/account`)
    await page.getByText('9 recovery codes left').waitFor()
    await signOut()
    await enterPassword(rafiq.email, rafiq.password)
    await page.getByRole('textbox', { name: 'Code' }).fill(codes[0])
    await page.keyboard.press('Enter')
    await page.getByText(/none of your recovery codes, or was used/).waitFor()
    await page.getByRole('textbox', { name: 'Code' }).fill(codes[1])
    await page.keyboard.press('Enter')
    await page.waitForURL(`${server.url}/`)
  })

  it('lets another session be ended, at once', async () => {
    const status = await elsewhere(codes[2])
    expect(await status()).toBe(200)
    await page.goto(`${server.url}/account`)
    const others = page.getByRole('table', { name: 'sessions' }).getByRole('button', { name: 'End it' })
    await others.first().waitFor()
    while ((await others.count()) > 0) {
      const left = await others.count()
      await others.first().click()
      await expect.poll(() => others.count()).toBe(left - 1)
    }
    expect(await status()).toBe(401)
    await page.getByText('this one').waitFor()
    expect((await page.request.get(`${server.url}/api/me`)).status()).toBe(200)
  })
})

describe('sign-in, account, people, ledger and backups', () => {
  const screens = [['/account', 'Second factor'], ['/people', 'People'], ['/ledger', 'Ledger'], ['/backups', 'Backups']] as const

  it('have no fault by axe-core, light and dark', async () => {
    const found: string[] = []
    await signOut()
    await page.getByText('People of the demo').waitFor()
    found.push(...(await faultsOf(page, '/sign-in')))
    await enterPassword(silvan.email, silvan.password)
    await page.waitForURL(`${server.url}/`)
    for (const [path, heading] of screens) {
      await page.goto(`${server.url}${path}`)
      await page.getByRole('heading', { name: heading, exact: true }).first().waitFor()
      await page.getByText('waiting').waitFor({ state: 'detached' }).catch(() => {})
      found.push(...(await faultsOf(page, path)))
    }
    expect(found).toEqual([])
  })

  it('threw no error', () => expect(errors).toEqual([]))
})
