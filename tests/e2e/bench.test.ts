import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { BrowserContext, Locator, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { faultsOf } from './axe.ts'
import { openBrowser } from './chromium.ts'
import { startServer, type RunningServer } from './server.ts'

let server: RunningServer
let browser: BrowserContext
let page: Page
const folder = mkdtempSync(join(tmpdir(), 'detent-bench-'))
const errors: string[] = []
let taps = 0

async function signIn(name: string) {
  await browser.clearCookies()
  await page.goto(`${server.url}/sign-in`)
  await page.getByText(name).first().click()
  await page.getByRole('button', { name: 'Sign in', exact: true }).click()
  await page.waitForURL(`${server.url}/`)
  await page.getByRole('heading', { level: 1 }).filter({ hasText: name.split(' ')[0] }).waitFor()
}

async function tap(what: Locator) {
  taps += 1
  await what.click()
}

/** Nothing on the page is wider than the screen. */
const widerBy = () => page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser({ width: 360, height: 740 })
  page = browser.pages()[0]
  page.on('pageerror', (error) => errors.push(error.message))
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

describe("the builder's way, on a screen of 360 px", () => {
  it('from the desk to a verified record in at most six taps', async () => {
    await signIn('Pascoe Adeyemi')
    await page.getByRole('region', { name: 'At the bench' }).getByText('H-0335').waitFor()
    expect(await widerBy()).toBe(0)
    taps = 0
    const task = page.getByRole('region', { name: 'At the bench' }).getByRole('listitem').filter({ hasText: 'R3 yaw' })
    await tap(task.getByRole('link', { name: /^Flash/ }))
    await page.getByRole('heading', { name: 'R3 yaw' }).waitFor()
    await page.getByRole('note', { name: 'caution' }).filter({ hasText: 'emergency stop in reach' }).waitFor()
    await page.getByText('withdrawn release on board').locator('visible=true').first().waitFor()
    expect(await widerBy()).toBe(0)

    const download = page.waitForEvent('download')
    await tap(page.getByRole('button', { name: 'Download .hex of R3 yaw' }))
    const file = join(folder, 'h-0335.hex')
    await (await download).saveAs(file)
    expect(readFileSync(file, 'latin1')).toMatch(/^:[0-9A-F]+\r?\n[\s\S]+:00000001FF\r?\n$/)
    await page.getByText(/^saved/).waitFor()

    const chooser = page.waitForEvent('filechooser')
    await tap(page.getByText('choose the read-back, or drop it here'))
    await (await chooser).setFiles(file)
    await page.getByText(/equal to r\d+/).waitFor()
    await tap(page.getByRole('button', { name: 'Record the flash' }))
    await page.getByRole('heading', { name: 'R3 yaw is recorded' }).waitFor()
    await page.getByText(/as read back/).waitFor()
    expect(taps).toBeLessThanOrEqual(6)

    await page.getByRole('link', { name: 'Its history' }).click()
    await page.getByRole('heading', { name: 'H-0335' }).waitFor()
    await page.getByText('read-back verified').first().waitFor()
    expect(await widerBy()).toBe(0)
  })

  it('takes what a scanner types, the serial number and Enter', async () => {
    await page.goto(`${server.url}/machines/dunlin/bench`)
    await page.getByRole('textbox', { name: /Scan a board/ }).waitFor()
    await page.keyboard.type('h-0345\n')
    await page.getByRole('heading', { name: 'R3 knee' }).waitFor()
    await page.getByText('H-0345').locator('visible=true').first().waitFor()

    await page.goto(`${server.url}/machines/dunlin/bench`)
    await page.getByRole('textbox', { name: /Scan a board/ }).waitFor()
    await page.keyboard.type('H-0901\n')
    await page.getByText('H-0901 is new on Dunlin; pick the joint it goes to.').waitFor()
    await page.getByRole('link', { name: /L1 hip/ }).click()
    await page.getByText('were measured on H-0265, not on H-0901').waitFor()
    expect(await page.getByRole('button', { name: /^Download/ }).count()).toBe(0)
  })

  it('names the register of a bit that flipped, and records that it differs', async () => {
    await page.goto(`${server.url}/machines/dunlin/bench?joint=l1-knee`)
    const waiting = page.waitForEvent('download')
    await page.getByRole('button', { name: 'Download .bin of L1 knee' }).click()
    const file = join(folder, 'h-0270.bin')
    await (await waiting).saveAs(file)
    const bytes = readFileSync(file)
    // velocity gain of hinge 2.1.0, examples/firmware/hinge-2.1.0.schema.json: address 0x24, q7.24, little endian; the bit is worth 2
    bytes[0x27] ^= 2
    writeFileSync(file, bytes)
    await page.locator('input[type=file]').setInputFiles(file)
    const differing = page.getByRole('list', { name: 'registers that differ' }).getByRole('listitem')
    await differing.first().waitFor()
    expect(await differing.count()).toBe(1)
    expect((await differing.first().textContent())!.replaceAll('\u00a0', ' ')).toMatch(/0x24Velocity gainfound 1\.2A·s\/rad, expected 3\.2A·s\/rad/)
    await page.getByRole('button', { name: 'Record that it differs' }).click()
    await page.getByRole('heading', { name: 'L1 knee is recorded' }).waitFor()
    await page.goto(`${server.url}/boards/H-0270`)
    await page.getByText('read-back differs').first().waitFor()
  })

  it('has a bench card with the registers, the checksums and the way to the release', async () => {
    await page.goto(`${server.url}/machines/dunlin/releases/1.4.0/joints/l1-knee/card`)
    await page.getByRole('row', { name: /Velocity gain/ }).waitFor()
    expect(await page.getByRole('img', { name: /QR code of http.+\/machines\/dunlin\/releases\/1\.4\.0$/ }).count()).toBe(1)
    await page.getByText('CRC-16/IBM-3740').waitFor()
    expect(await widerBy()).toBe(0)
    const pdf = (await page.pdf({ preferCSSPageSize: true })).toString('latin1')
    // A5 in points, 1/72 inch: 148 mm × 210 mm
    const [, width, height] = /MediaBox\s*\[0 0 ([\d.]+) ([\d.]+)\]/.exec(pdf)!
    expect(Number(width)).toBeCloseTo((148 / 25.4) * 72, 0)
    expect(Number(height)).toBeCloseTo((210 / 25.4) * 72, 0)
  })
})

describe('at a desk', () => {
  beforeAll(() => page.setViewportSize({ width: 1440, height: 1000 }))

  it('a whole machine is recorded in one go', async () => {
    await page.goto(`${server.url}/boards?machine=teasel`)
    await page.getByRole('row', { name: /H-0401/ }).waitFor()
    await page.getByRole('button', { name: 'Record a whole machine…' }).click()
    const field = page.getByRole('textbox', { name: 'Serial number at wrist pitch' })
    await field.fill('H-0404')
    await field.press('Enter')
    expect(await page.evaluate(() => document.activeElement?.getAttribute('aria-label') ?? document.querySelector(`label[for="${document.activeElement?.id}"]`)?.textContent)).toBe('Serial number at wrist roll')
    expect(await faultsOf(page, 'the recording of a machine')).toEqual([])
    await page.getByRole('button', { name: /^Record \d flashes of/ }).click()
    await page.getByRole('row', { name: /H-0404.*wrist pitch.*current/ }).waitFor()
  })

  it('a table is previewed, then imported', async () => {
    const file = join(folder, 'boards.csv')
    writeFileSync(file, 'serial,joint,release\nH-0404,pitch,1.1.0\nH-0777,,\n=1+1,roll,\n')
    await page.goto(`${server.url}/boards?machine=teasel`)
    await page.getByRole('row', { name: /H-0401/ }).waitFor()
    await page.getByRole('button', { name: 'Import…' }).click()
    await page.locator('dialog input[type=file]').setInputFiles(file)
    await page.getByText('stands so already').waitFor()
    await page.getByText(/is no serial number/).waitFor()
    writeFileSync(file, 'serial,joint,release\nH-0404,pitch,1.1.0\nH-0777,,\n')
    await page.locator('dialog input[type=file]').setInputFiles(file)
    await page.getByRole('button', { name: 'Import 1 row' }).click()
    await page.getByText('1 row imported', { exact: false }).waitFor()
    await page.getByRole('button', { name: 'Close' }).click()
    await page.getByRole('row', { name: /H-0777/ }).waitFor()
  })
})

describe('a withdrawal, seen by three people', () => {
  it('is made by a release manager, who sees which boards it touches', async () => {
    await signIn('Hedda Lindqvist')
    await page.goto(`${server.url}/machines/dunlin/releases/1.4.0`)
    await page.getByRole('button', { name: 'Withdraw 1.4.0…' }).click()
    const dialog = page.locator('dialog[open]')
    await dialog.getByText(/boards hold it and have to be flashed again/).waitFor()
    await dialog.getByText('H-0345').waitFor()
    await dialog.getByRole('textbox', { name: 'Reason' }).fill('The knees strip their second stage at 2.80 A.')
    await dialog.getByRole('textbox', { name: 'Write the name of the release' }).fill('Dunlin 1.4.0')
    await dialog.getByRole('button', { name: 'Withdraw', exact: true }).click()
    await page.getByText('withdrawn: must no longer be flashed').waitFor()
  })

  it('stands first on the desk of a builder, who finds nothing to flash', async () => {
    await signIn('Pascoe Adeyemi')
    const first = page.getByRole('region', { name: 'At the bench' }).getByRole('listitem').first()
    expect(await first.textContent()).toMatch(/withdrawn release on board/)
    await page.goto(`${server.url}/machines/dunlin/bench`)
    await page.getByText('There is nothing to flash').waitFor()
  })

  it('is warned of where a flash of it is put on record all the same, and marked for good', async () => {
    await page.getByRole('button', { name: 'Record what was flashed all the same' }).click()
    await page.getByRole('link', { name: /L3 knee/ }).click()
    await page.getByRole('alert').filter({ hasText: '1.4.0 is withdrawn' }).waitFor()
    expect(await page.getByRole('button', { name: /^Download/ }).count()).toBe(0)
    expect(await faultsOf(page, 'a withdrawn release at the bench')).toEqual([])
    await page.getByRole('button', { name: 'Record the withdrawn release' }).click()
    await page.getByRole('heading', { name: 'L3 knee is recorded' }).waitFor()
    await page.getByText('the release managers were told').waitFor()
  })

  it('leaves an observer a machine without a current release', async () => {
    await signIn('Yuna Brandt')
    await page.goto(`${server.url}/machines/dunlin`)
    await page.getByText('withdrawn release on board').first().waitFor()
    await page.getByText('current release').waitFor()
    await page.getByText('none', { exact: true }).first().waitFor()
  })

  it('is told to the administrator\'s mail queue, with its reason', async () => {
    await signIn('Silvan Okoro')
    await page.goto(`${server.url}/mail`)
    await page.getByText('Withdrawn: Dunlin 1.4.0').first().waitFor()
  })
})

it('threw no error on any page', () => expect(errors).toEqual([]))
