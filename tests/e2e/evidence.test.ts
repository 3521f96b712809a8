import { mkdtempSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { BrowserContext, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { demoSignIns } from '../../server/modules/people/demo-sign-ins.ts'
import { openBrowser } from './chromium.ts'
import { startServer, type RunningServer } from './server.ts'
import { faultsOf } from './axe.ts'

let server: RunningServer
let browser: BrowserContext
let page: Page
const folder = mkdtempSync(join(tmpdir(), 'detent-evidence-'))
const errors: string[] = []

/** A log as a bench of another country writes it: so many rows, none of them of any joint in particular. */
function aLongLog(rows: number): string {
  const file = join(folder, `long-${rows}.csv`)
  const lines = ['Zeit [ms];Sollwert [deg];Winkel [deg];Strom [mA]']
  for (let k = 0; k < rows; k++) lines.push(`${k};${k % 500 < 250 ? 10 : -10};${(10 * Math.sin(k / 80)).toFixed(3)};${(250 * Math.sin(k / 60)).toFixed(1)}`.replaceAll('.', ','))
  writeFileSync(file, `${lines.join('\n')}\n`)
  return file
}

async function signIn(on: Page, name: string) {
  const { email, password } = demoSignIns.find((d) => d.name === name)!
  const answer = await on.request.post(`${server.url}/api/session`, { data: { email, password } })
  expect(answer.status()).toBe(200)
}

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser()
  page = browser.pages()[0]
  page.on('pageerror', (error) => errors.push(error.message))
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

describe('a bench log, from its upload to a draft', () => {
  it('is uploaded at its joint, and its columns are named: guessed where their names say it, chosen where not', async () => {
    await signIn(page, 'Mirela Castanho')
    await page.goto(`${server.url}/machines/dunlin/joints/r1-knee`)
    await page.getByLabel('bench log file').setInputFiles(aLongLog(400_000))
    await page.getByRole('heading', { name: 'Which column is which' }).waitFor()
    await page.getByText('decimal comma').waitFor()
    await page.getByLabel('column of time').selectOption({ label: 'Zeit (ms)' })
    await page.getByLabel('column of position').selectOption({ label: 'Winkel (deg)' })
    await page.getByLabel('column of set-point').selectOption({ label: 'Sollwert (deg)' })
    await page.getByLabel('column of current').selectOption({ label: 'Strom (mA)' })
    expect(await page.getByLabel('unit of current').inputValue()).toBe('mA')
    expect(await faultsOf(page, 'the columns')).toEqual([])
  })

  it('is stopped in the middle of the reading, stays as it was sent, and is read again', async () => {
    await page.getByRole('button', { name: 'Read it' }).click()
    await page.getByRole('button', { name: /^stop/ }).click()
    await page.getByText('The file is kept as it was sent; read it again when you like.').waitFor()
    // a reload finds it as it was left, the columns as chosen
    await page.reload()
    await page.getByRole('heading', { name: 'Which column is which' }).waitFor()
    expect(await page.getByLabel('unit of time').inputValue()).toBe('ms')
    await page.getByRole('button', { name: 'Read it' }).click()
    await page.getByRole('heading', { name: 'What was read' }).waitFor({ timeout: 60_000 })
    await page.getByText(/least and greatest of each \d+ of 400\s?000\s+rows/).waitFor()
  })

  it('of the demo is drawn over its prediction, and gives the values of the joint on the bench with their errors', async () => {
    await page.goto(`${server.url}/machines/dunlin/joints/l2-knee`)
    await page.getByRole('link', { name: 'l2-knee-soft-mud.csv' }).click()
    const errorsTable = page.getByRole('table', { name: 'error of the prediction' })
    await errorsTable.getByRole('row', { name: /current/ }).waitFor()
    const identified = page.getByRole('list', { name: 'identified values' })
    await identified.getByRole('checkbox', { name: /winding resistance/ }).waitFor()
    expect(await identified.getByRole('listitem').count()).toBe(6)
    expect(await faultsOf(page, 'a log')).toEqual([])
  })

  it('becomes a draft of the drive train by choice, with the log as its evidence', async () => {
    const identified = page.getByRole('list', { name: 'identified values' })
    for (const letter of ['inductance', 'back-EMF', 'drag']) await identified.getByRole('checkbox', { name: new RegExp(letter) }).uncheck()
    await page.getByRole('button', { name: 'Use these in the drive train…' }).click()
    await page.getByLabel('Title').fill('Knee as measured')
    await page.getByRole('button', { name: 'Draft it' }).click()
    await page.waitForURL(/\/changes\/dunlin-\d+$/)
    const change = page.url().split('/').at(-1)!
    const view = (await (await page.request.get(`${server.url}/api/changes/${change}`)).json()) as { title: string; state: string; reason: string; base: Set; set: Set }
    interface Set { families: Record<string, { driveTrain: Record<string, unknown> }> }
    expect([view.title, view.state]).toEqual(['Knee as measured', 'draft'])
    const [before, after] = [view.base.families.knee.driveTrain, view.set.families.knee.driveTrain]
    expect(Object.keys(after).filter((k) => JSON.stringify(after[k]) !== JSON.stringify(before[k])).sort()).toEqual(['J_load', 'R', 'tau_c'])
  })

  it('reads well on a narrow screen, and in the dark', async () => {
    const other = await openBrowser({ width: 360, height: 740, dark: true })
    const narrow = other.pages()[0]
    await signIn(narrow, 'Mirela Castanho')
    await narrow.goto(`${server.url}/machines/dunlin/evidence/1`)
    await narrow.getByRole('table', { name: 'error of the prediction' }).waitFor()
    await narrow.getByRole('list', { name: 'identified values' }).waitFor()
    expect(await narrow.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)).toBe(0)
    expect(await faultsOf(narrow, 'a log at 360 px')).toEqual([])
    await other.close()
    expect(errors).toEqual([])
  })
})
