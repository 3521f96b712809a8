import type { BrowserContext, Cookie, Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest'
import { demoSignIns } from '../../server/modules/people/demo-sign-ins.ts'
import { axe, showTheme } from './axe.ts'
import { openBrowser } from './chromium.ts'
import { startServer, type RunningServer } from './server.ts'

let server: RunningServer
let browser: BrowserContext
let page: Page
/** key of the change that these tests bring from draft to release */
let change: string
let release: string
const errors: string[] = []

const signInOf = (name: string) => demoSignIns.find((d) => d.name === name)!

/** Each person's session, begun once: sign-ins are throttled. */
const sessions = new Map<string, Cookie[]>()

async function signIn(name: string, at = page) {
  const context = at.context()
  await context.clearCookies()
  const known = sessions.get(name)
  if (known) await context.addCookies(known)
  else {
    const { email, password } = signInOf(name)
    expect((await context.request.post(`${server.url}/api/session`, { data: { email, password } })).status()).toBe(200)
    sessions.set(name, await context.cookies())
  }
  await at.goto(server.url)
  await at.getByRole('link', { name: 'desk', exact: true }).waitFor()
}

/** An act of the API by whoever is signed in; the pages are for what is tested. */
async function ask<T>(method: string, path: string, body?: object, revision?: number): Promise<T> {
  const { api } = await page.evaluate(
    async ([m, p, b, r]) => {
      const me = (await (await fetch('/api/me')).json()) as { token: string }
      const headers = { 'Content-Type': 'application/json', 'X-Detent-Token': me.token, ...(r === undefined ? {} : { 'If-Match': `"${r}"` }) }
      const answer = await fetch(`/api${p}`, { method: m, headers, ...(m === 'GET' ? {} : { body: JSON.stringify(b ?? {}) }) })
      if (!answer.ok) throw new Error(`${m} ${p}: ${answer.status} ${await answer.text()}`)
      return { api: (await answer.json()) as unknown }
    },
    [method, path, body, revision] as const,
  )
  return api as T
}

interface Read {
  revision: number
  set: { families: Record<string, { values: Record<string, unknown> }> }
}
const read = () => ask<Read>('GET', `/changes/${change}`)
const edit = async (name: string, to: unknown) => ask('PATCH', `/changes/${change}/values`, { edits: [{ pointer: `/families/knee/values/${name}`, from: (await read()).set.families.knee.values[name], to }] })

const review = () => page.goto(`${server.url}/changes/${change}/review`)
const signButton = () => page.getByRole('button', { name: /^Sign the peer review|^Sign and release/ })
const whyNot = () => signButton().getAttribute('aria-description')
const rail = (words: string, who: string) => page.getByRole('listitem').filter({ hasText: words }).filter({ hasText: who }).first()

/** Submits from the page as soon as the check allows it. */
async function submit() {
  await page.goto(`${server.url}/changes/${change}`)
  const button = page.getByRole('button', { name: 'Submit', exact: true })
  await expect.poll(async () => (await button.getAttribute('aria-disabled')) !== 'true', { timeout: 60_000 }).toBe(true)
  await button.click()
  await page.waitForURL(/\/review$/)
  await rail('submitted', 'Mirela Castanho').waitFor()
}

/** What axe finds grave or worse on the page as it stands, in both themes. */
async function grave(at = page): Promise<string[]> {
  const found: string[] = []
  for (const colorScheme of ['light', 'dark'] as const) {
    await showTheme(at, colorScheme)
    await at.evaluate(axe)
    const results = await at.evaluate(async () => {
      const { run } = (window as unknown as { axe: { run(): Promise<{ violations: { id: string; impact: string; nodes: { target: string[]; failureSummary: string }[] }[] }> } }).axe
      return (await run()).violations.filter((v) => v.impact === 'serious' || v.impact === 'critical').flatMap((v) => v.nodes.slice(0, 5).map((n) => `${v.id}: ${n.target.join(' ')}: ${n.failureSummary}`))
    })
    found.push(...results.map((r) => `${colorScheme} ${r}`))
  }
  return found
}

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser()
  page = browser.pages()[0]
  page.setDefaultTimeout(20_000)
  page.on('pageerror', (error) => errors.push(error.message))
})
afterEach(() => page.emulateMedia({ media: 'screen', colorScheme: 'light' }))
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

describe('a change with a concession, returned once, signed and released', () => {
  it('is drafted by an engineer, who asks for the concession that the check wants', async () => {
    await signIn('Mirela Castanho')
    change = (await ask<{ key: string }>('POST', '/changes', { machine: 'dunlin', title: 'Knees without a watchdog at the pool', reason: 'The pool bench has no controller that would feed the watchdog.' })).key
    await edit('busWatchdog', 0)
    await edit('speedLimit', 5.5)
    await page.goto(`${server.url}/changes/${change}`)
    await page.getByRole('button', { name: /Request/ }).click()
    const dialog = page.locator('dialog[open]')
    await dialog.getByRole('textbox', { name: 'Limit of the concession' }).fill('off, at the pool bench only')
    await dialog.getByRole('textbox', { name: 'Reason' }).fill('The bench has its own stop, within reach, and nobody in the water.')
    await dialog.getByRole('combobox', { name: 'It ends' }).selectOption('count')
    await dialog.getByRole('textbox', { name: 'Boards' }).fill('6')
    await dialog.getByRole('button', { name: 'Request it' }).click()
    await dialog.getByText('Every finding outside policy has its request.').waitFor()
    await dialog.getByRole('button', { name: 'Close' }).click()
    await submit()
  })

  it('is read by its reviewer with the keyboard alone, row by row', async () => {
    await signIn('Rafiq Sandoval')
    await review()
    await page.getByText('0 of 2 rows read').waitFor()
    await expect.poll(whyNot).toBe('First mark 2 more rows as read.')
    await page.keyboard.press('.')
    await page.keyboard.press(' ')
    await page.getByText('1 of 2 rows read').waitFor()
    await page.keyboard.press(' ')
    await page.getByText('All 2 rows read').waitFor()
    await expect.poll(whyNot).toBe('State what you sign first.')
    await page.reload()
    await page.getByText('All 2 rows read').waitFor()
  })

  it('gets a comment on a row that names its writer, by keyboard too', async () => {
    await page.keyboard.press('.')
    await page.keyboard.press('Enter')
    await page.keyboard.type('@mir')
    await page.getByRole('option', { name: 'Mirela Castanho' }).waitFor()
    await page.keyboard.press('Enter')
    await page.keyboard.type('would 5.2 not do?')
    await page.keyboard.press('Control+Enter')
    await page.getByRole('listitem', { name: 'comment 1 by Rafiq Sandoval' }).waitFor()
    await expect.poll(whyNot).toBe('First have one open comment answered.')
    expect(await page.evaluate(() => (document.activeElement as HTMLElement).dataset.rowKey)).toMatch(/^value:/)
  })

  it('is returned with a reason', async () => {
    await page.getByRole('button', { name: 'Return…' }).click()
    const dialog = page.locator('dialog[open]')
    await dialog.getByRole('button', { name: 'Return it' }).click()
    await dialog.getByText('Say what is to be altered.').waitFor()
    await dialog.getByRole('textbox', { name: 'Reason' }).fill('A little less speed at the pool, please.')
    await dialog.getByRole('button', { name: 'Return it' }).click()
    await rail('returned', 'Rafiq Sandoval').waitFor()
  })

  it('is found by its writer on the desk, answered, mended and submitted again', async () => {
    await signIn('Mirela Castanho')
    const named = page.getByRole('region', { name: 'you are named' })
    await named.getByText('would 5.2 not do?').waitFor()
    await named.getByRole('link', { name: /Knees without a watchdog/ }).click()
    await page.waitForURL(/review#comment-1$/)
    expect(await page.getByRole('button', { name: 'mark answered, comment 1' }).count()).toBe(0)
    await page.getByRole('button', { name: 'write under it, comment 1' }).click()
    await page.getByRole('textbox', { name: 'Under comment 1' }).fill('It would; altered.')
    await page.getByRole('button', { name: 'Write it', exact: true }).click()
    await page.getByRole('listitem', { name: 'comment 1 by Rafiq Sandoval' }).getByText('It would; altered.').waitFor()
    await edit('speedLimit', 5.2)
    await submit()
  })

  it('keeps what was read and says the same; the altered row is unread', async () => {
    await signIn('Rafiq Sandoval')
    await review()
    await page.getByText('1 of 2 rows read').waitFor()
    await expect.poll(whyNot).toBe('First mark one more row as read and have one open comment answered.')
    const history = page.getByRole('region', { name: 'history of the change' })
    await history.getByText('“A little less speed at the pool, please.”').waitFor()
    await page.getByRole('button', { name: 'next unread' }).click()
    await page.keyboard.press(' ')
    await page.getByText('All 2 rows read').waitFor()
  })

  it('is not signed over an open comment, not even past the page', async () => {
    const view = await ask<{ revision: number; contentHash: string }>('GET', `/changes/${change}`)
    await expect(ask('POST', `/changes/${change}/sign`, { password: signInOf('Rafiq Sandoval').password, contentHash: view.contentHash }, view.revision)).rejects.toThrow(/409.*One comment is not answered/s)
  })

  it('is signed by the peer reviewer once the comment is answered', async () => {
    await page.getByRole('button', { name: 'mark answered, comment 1' }).click()
    await page.getByText('answered', { exact: true }).waitFor()
    await page.getByRole('checkbox', { name: /I have read every value/ }).check()
    await page.getByRole('textbox', { name: 'Your password' }).fill(signInOf('Rafiq Sandoval').password)
    await expect.poll(whyNot).toBeNull()
    await signButton().click()
    await rail('approved', 'Rafiq Sandoval').waitFor()
    const panel = page.getByRole('region', { name: 'signatures' })
    await panel.getByText('Rafiq Sandoval', { exact: true }).first().waitFor()
  })

  it('is released by the manager, who reads by whole parts, and carries its concession on the release', async () => {
    await signIn('Hedda Lindqvist')
    await review()
    await page.getByText('0 of 2 rows read').waitFor()
    await page.getByRole('button', { name: /mark 2 rows as read/ }).click()
    await page.getByText('All 2 rows read').waitFor()
    const card = page.getByRole('region', { name: 'concession 1' })
    expect(await card.textContent()).toContain('off, at the pool bench only')
    expect(await card.textContent()).toContain('6 boards')
    await page.getByRole('checkbox', { name: /I grant the concessions/ }).check()
    await page.getByRole('textbox', { name: 'Your password' }).fill(signInOf('Hedda Lindqvist').password)
    await expect.poll(whyNot, { timeout: 30_000 }).toBeNull()
    await signButton().click()
    await page.waitForURL(/\/releases\/\d/)
    release = new URL(page.url()).pathname
    const sheet = page.getByRole('article', { name: /release sheet of Dunlin/ })
    await sheet.getByText('off, at the pool bench only').waitFor()
    for (const [meaning, who] of [['peer review', 'Rafiq Sandoval'], ['release', 'Hedda Lindqvist']]) {
      await sheet.getByText(meaning, { exact: true }).waitFor()
      expect(await sheet.getByText(who, { exact: true }).count(), who).toBeGreaterThan(0)
    }
  })

  it('shows each signature with printed name, meaning and time on paper, without the forms', async () => {
    await review()
    const panel = page.getByRole('region', { name: 'signatures' })
    await panel.getByText('Hedda Lindqvist', { exact: true }).first().waitFor()
    await page.emulateMedia({ media: 'print' })
    for (const words of ['Rafiq Sandoval', 'Hedda Lindqvist', 'peer review', 'release']) expect(await panel.getByText(words, { exact: true }).locator('visible=true').count(), words).toBeGreaterThan(0)
    expect(await panel.locator('time').locator('visible=true').count()).toBe(2)
    expect(await page.getByRole('textbox').locator('visible=true').count()).toBe(0)
  })

  it('left its steps in the ledger, comments and rows read among them', async () => {
    const { entries } = await ask<{ entries: { act: string; subject: { change?: string }; details: Record<string, unknown> }[] }>('GET', '/ledger')
    const own = entries.filter((e) => e.subject.change === change)
    expect(own.map((e) => e.act)).toEqual(expect.arrayContaining(['comment written', 'comment answered', 'change returned', 'change peer review', 'change released']))
    for (const act of ['change peer review', 'change released']) expect(own.find((e) => e.act === act)!.details).toMatchObject({ rowsRead: 2 })
  })
})

describe('two people with one draft open', () => {
  it('see each other, and what the other saves', async () => {
    await signIn('Mirela Castanho')
    change = (await ask<{ key: string }>('POST', '/changes', { machine: 'dunlin', title: 'Slower still', reason: 'Tried at the pool.' })).key
    const { people } = await ask<{ people: { id: number; name: string }[] }>('GET', '/people')
    await ask('POST', `/changes/${change}/writers`, { person: people.find((p) => p.name === 'Tobias Oyelaran')!.id })
    await page.goto(`${server.url}/changes/${change}?view=cascade&family=knee`)
    const other = await openBrowser()
    try {
      const theirs = other.pages()[0]
      theirs.setDefaultTimeout(20_000)
      await signIn('Tobias Oyelaran', theirs)
      await theirs.goto(`${server.url}/changes/${change}?view=cascade&family=knee`)
      await page.getByText('with Tobias Oyelaran at the values').waitFor()
      await theirs.getByText('with Mirela Castanho at the values').waitFor()
      const field = theirs.getByRole('textbox', { name: 'Velocity gain', exact: true })
      await field.fill('2.95')
      await field.press('Tab')
      await page.getByText(/saved Velocity gain of the Knee family/).waitFor()
      await expect.poll(() => page.getByRole('textbox', { name: 'Velocity gain', exact: true }).inputValue()).toBe('2.95')
      await page.getByRole('button', { name: 'seen' }).click()
      await theirs.goto('about:blank')
      await page.getByText('with Tobias Oyelaran at the values').waitFor({ state: 'hidden' })
    } finally {
      await other.close()
    }
  })
})

describe('axe finds nothing grave, in either theme', () => {
  it('on the review, with rows to read and a comment being written', async () => {
    await signIn('Rafiq Sandoval')
    await page.goto(`${server.url}/changes/dunlin-10/review`)
    await page.getByText('0 of 2 rows read').waitFor()
    await page.getByText('Comment on the change').waitFor()
    await page.getByText('full report').waitFor()
    expect(await grave()).toEqual([])
    await page.getByRole('textbox', { name: 'Comment on the change' }).pressSequentially('@')
    await page.getByRole('listbox', { name: 'people' }).waitFor()
    expect(await grave()).toEqual([])
  })

  it('on the review of a narrow screen', async () => {
    await page.setViewportSize({ width: 360, height: 740 })
    try {
      expect(await grave()).toEqual([])
      expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(360)
    } finally {
      await page.setViewportSize({ width: 1440, height: 1000 })
    }
  })

  it('on the change and the release', async () => {
    await signIn('Mirela Castanho')
    await page.goto(`${server.url}/changes/${change}?view=cascade&family=knee`)
    await page.getByRole('textbox', { name: 'Velocity gain', exact: true }).waitFor()
    await page.getByText('Poles').first().waitFor()
    expect(await grave()).toEqual([])
    await page.goto(`${server.url}${release}`)
    await page.getByText('signed content').first().waitFor()
    expect(await grave()).toEqual([])
  })

  it('on the desk', async () => {
    await signIn('Tobias Oyelaran')
    await page.getByRole('region', { name: 'you are named' }).waitFor()
    expect(await grave()).toEqual([])
  })
})

it('threw no error on any page', () => expect(errors).toEqual([]))
