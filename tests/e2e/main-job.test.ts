import { spawnSync } from 'node:child_process'
import { createHash } from 'node:crypto'
import { mkdtempSync, readFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { BrowserContext, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { demoSignIns } from '../../server/modules/people/demo-sign-ins.ts'
import { openBrowser } from './chromium.ts'
import { startServer, type RunningServer } from './server.ts'

let server: RunningServer
let browser: BrowserContext
let page: Page
let change: string
const errors: string[] = []

const passwordOf = (name: string) => demoSignIns.find((d) => d.name === name)!.password

async function signIn(name: string) {
  await browser.clearCookies()
  await page.goto(`${server.url}/sign-in`)
  await page.getByText(name).first().click()
  await page.getByRole('button', { name: 'Sign in', exact: true }).click()
  await page.getByRole('link', { name: 'desk', exact: true }).waitFor()
}

/** Types a value into its field of the cascade and leaves the field. */
async function type(label: string, value: string) {
  const field = page.getByRole('textbox', { name: label, exact: true })
  await field.fill(value)
  await field.press('Tab')
}

/** Marks every row of the diff as read, one by one: nobody signs what they did not read. */
async function readAll() {
  const marks = page.getByRole('checkbox', { name: / read$/ })
  await marks.first().waitFor()
  for (let i = 0; i < (await marks.count()); i += 1) if (!(await marks.nth(i).isChecked())) await marks.nth(i).click()
}

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser()
  page = browser.pages()[0]
  page.setDefaultTimeout(15_000)
  page.on('pageerror', (error) => errors.push(error.message))
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

describe('the main job, in a browser', () => {
  it('an engineer drafts a knee gain that makes the loop unstable, and is stopped', async () => {
    await signIn('Mirela Castanho')
    await page.goto(`${server.url}/machines/dunlin`)
    await page.getByRole('button', { name: 'Draft a change…' }).click()
    await page.getByRole('textbox', { name: 'Title' }).fill('Knee under load')
    await page.getByRole('textbox', { name: 'Reason' }).fill('The knee gives way by 6 mm when the sampling tube is lowered.')
    await page.getByRole('button', { name: 'Draft it' }).click()
    await page.waitForURL(/\/changes\/dunlin-\d+/)
    change = new URL(page.url()).pathname
    await page.goto(`${server.url}${change}?view=cascade&family=knee`)
    await type('Samples', '40')
    await type('Velocity gain', '7.9')
    await page.getByText('unstable', { exact: true }).first().waitFor()
    await page.getByText(/finding blocks|findings block/).waitFor()
    const submit = page.getByRole('button', { name: 'Submit' })
    expect((await submit.isDisabled()) || (await submit.getAttribute('aria-disabled')) === 'true').toBe(true)
  })

  it('lowers it, and submits', async () => {
    await type('Samples', '14')
    await type('Velocity gain', '3.3')
    await page.getByText('stable', { exact: true }).first().waitFor()
    const submit = page.getByRole('button', { name: 'Submit' })
    await expect.poll(async () => (await submit.isEnabled()) && (await submit.getAttribute('aria-disabled')) !== 'true', { timeout: 20_000 }).toBe(true)
    await submit.click()
    const confirm = page.locator('dialog[open]').getByRole('button', { name: /submit/i })
    if (await confirm.isVisible({ timeout: 1500 }).catch(() => false)) await confirm.click()
    await page.getByRole('listitem').filter({ hasText: 'submitted' }).filter({ hasText: 'Mirela Castanho' }).first().waitFor()
  })

  it("refuses the author's own attempt to sign, in words and by the server", async () => {
    await page.goto(`${server.url}${change}/review`)
    await page.getByText('You wrote in this change').or(page.getByText(/takes the role peer reviewer/)).first().waitFor()
    const status = await page.evaluate(async (path) => {
      const me = (await (await fetch('/api/me')).json()) as { token: string }
      const view = (await (await fetch(`/api${path}`)).json()) as { revision: number; contentHash: string }
      const answer = await fetch(`/api${path}/sign`, { method: 'POST', headers: { 'Content-Type': 'application/json', 'X-Detent-Token': me.token, 'If-Match': `"${view.revision}"` }, body: JSON.stringify({ password: 'demo only mudflat knee', contentHash: view.contentHash }) })
      return answer.status
    }, change)
    expect(status).toBe(403)
  })

  it('a peer reviewer reads and signs', async () => {
    await signIn('Rafiq Sandoval')
    await page.goto(`${server.url}${change}/review`)
    await page.getByText('Velocity gain').first().waitFor()
    await page.getByText(/CD CC 4C 03/).first().waitFor({ timeout: 10_000 })
    await readAll()
    await page.getByRole('checkbox', { name: /I have read every value/ }).check()
    await page.getByRole('textbox', { name: 'Your password' }).fill(passwordOf('Rafiq Sandoval'))
    await page.getByRole('button', { name: /^Sign/ }).click()
    await page.getByRole('listitem').filter({ hasText: 'approved' }).filter({ hasText: 'Rafiq Sandoval' }).first().waitFor()
  })

  it('a release manager signs second and numbers it', async () => {
    await signIn('Hedda Lindqvist')
    await page.goto(`${server.url}${change}/review`)
    const version = page.getByRole('textbox', { name: /Version of/ })
    await expect.poll(() => version.inputValue(), { timeout: 20_000 }).toMatch(/^\d+\.\d+\.\d+$/)
    await readAll()
    await page.getByRole('checkbox', { name: /I grant the concessions/ }).check()
    await page.getByRole('textbox', { name: 'Your password' }).fill(passwordOf('Hedda Lindqvist'))
    await page.getByRole('button', { name: /^Sign and release/ }).click()
    await page.waitForURL(/\/releases\//)
    await page.getByText('signed content').first().waitFor()
  })

  it('a builder downloads the image; an outside tool reads the HEX back to the same bytes', async () => {
    const sheet = page.url()
    await signIn('Pascoe Adeyemi')
    await page.goto(sheet)
    const folder = mkdtempSync(join(tmpdir(), 'detent-flash-'))
    const row = page.getByRole('row').filter({ hasText: 'R3 knee' })
    const take = async (ending: string) => {
      const waiting = page.waitForEvent('download')
      await row.getByRole('link', { name: new RegExp(ending.replace('.', '\\.')) }).or(row.getByRole('button', { name: new RegExp(ending.replace('.', '\\.')) })).first().click()
      const path = join(folder, `r3-knee${ending}`)
      await (await waiting).saveAs(path)
      return path
    }
    const bin = readFileSync(await take('.bin'))
    const hex = await take('.hex')
    const shown = ((await row.textContent()) ?? '').replaceAll(/\s/g, '')
    expect(shown).toContain(createHash('sha256').update(bin).digest('hex').slice(0, 16))
    // srec_cat (srecord) reads Intel HEX as it is written by anybody; gaps are filled with the map's fill
    const back = join(folder, 'back.bin')
    const { status, stderr } = spawnSync('srec_cat', [hex, '-intel', '-fill', '0xff', '0', '128', '-o', back, '-binary'], { encoding: 'utf8' })
    expect(stderr).toBe('')
    expect(status).toBe(0)
    expect(readFileSync(back).equals(bin)).toBe(true)
  })

  it('left an entry for each act in the ledger, and the chain holds', async () => {
    const number = change.split('/').at(-1)!
    await page.goto(`${server.url}/ledger`)
    for (const act of ['change drafted', 'change submitted', 'change peer review', 'change approved', 'change released', 'release made']) await page.locator('main').getByText(act).locator('visible=true').first().waitFor()
    const verdict = await page.evaluate(async () => (await fetch('/api/ledger/verify')).json() as Promise<{ holds: boolean }>)
    expect(verdict.holds).toBe(true)
    const refused = await page.evaluate(async (key) => {
      const { entries } = (await (await fetch('/api/ledger')).json()) as { entries: { act: string; subject: { change?: string } }[] }
      return entries.filter((e) => e.act === 'refused' && e.subject.change === key).length
    }, number)
    expect(refused).toBeGreaterThan(0)
  })

  it('threw no error on any page', () => expect(errors).toEqual([]))
})
