import type { BrowserContext, Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest'
import { faultsOf } from './axe.ts'
import { openBrowser } from './chromium.ts'
import { actAs, apiOf, changeOf, draftOf, tabTo, type Api } from './edit-desk.ts'
import { startServer, type RunningServer } from './server.ts'

/** A full edit in the cascade, by the keyboard alone and by pointer, and in the table by pointer. */
let server: RunningServer
let browser: BrowserContext
let page: Page
let author: Api
let change: string
const errors: string[] = []
/** how long a value may take to be saved on a busy machine */
const soon = { timeout: 20_000 }

const familyValue = async (name: string) => (await changeOf(author, change)).set.families.knee.values[name]
const jointValues = async (joint: string) => (await changeOf(author, change)).set.joints[joint].values
const field = (name: string) => page.getByRole('textbox', { name, exact: true })
const at = (query: string) => page.goto(`${server.url}/changes/${change}${query}`)
const panel = () => page.getByRole('region', { name: 'live check' })
const press = async (...keys: string[]) => {
  for (const key of keys) await page.keyboard.press(key)
}

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser()
  page = browser.pages()[0]
  page.setDefaultTimeout(20_000)
  page.on('pageerror', (error) => errors.push(error.message))
  author = await apiOf(server.url, 'Mirela Castanho')
  await actAs(browser, server.url, author)
  change = await draftOf(author, 'Knees on the flats')
})
afterEach(() => page.emulateMedia({ colorScheme: 'light' }))
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

describe('the cascade', () => {
  it('is edited with the keyboard alone: a typed unit, a step, a ruler, undo and redo', async () => {
    await at('?view=cascade&family=knee')
    await panel().getByText('checked').waitFor()
    await tabTo(page, /^Current limit$/)
    await page.keyboard.press('Control+A')
    await page.keyboard.type('2450 mA')
    await page.keyboard.press('Enter')
    await expect.poll(() => familyValue('currentLimit'), soon).toBe(2.45)
    expect(await field('Current limit').inputValue()).toBe('2.45')
    await press('ArrowUp', 'Enter')
    await expect.poll(() => familyValue('currentLimit'), soon).toBe(2.55)
    await page.keyboard.press('Tab')
    expect(await page.evaluate(() => document.activeElement?.getAttribute('role'))).toBe('slider')
    const before = Number(await familyValue('currentLimit'))
    await press('ArrowLeft', 'ArrowLeft')
    await expect.poll(async () => Number(await familyValue('currentLimit')), soon).toBeLessThan(before)
    await page.keyboard.press('Control+Z')
    await expect.poll(async () => Number(await familyValue('currentLimit')), soon).toBeGreaterThan(2.4)
    await page.keyboard.press('Control+Shift+Z')
    await expect.poll(async () => Number(await familyValue('currentLimit')), soon).toBeLessThan(before)
  })

  it('is edited by pointer: dragged along a ruler, set back, promoted to the family', async () => {
    await at('?view=cascade&joint=r3-knee')
    const ruler = page.getByRole('slider', { name: 'Position gain', exact: true })
    const box = (await ruler.boundingBox())!
    await page.mouse.move(box.x + box.width * 0.5, box.y + 9)
    await page.mouse.down()
    await page.mouse.move(box.x + box.width * 0.8, box.y + 9, { steps: 6 })
    await page.mouse.up()
    await expect.poll(async () => typeof (await jointValues('r3-knee')).positionGain, soon).toBe('number')
    const own = (await jointValues('r3-knee')).positionGain
    await page.getByRole('link', { name: 'table', exact: true }).click()
    // The table begins at the joint looked at.
    await page.getByRole('gridcell', { name: /^Position gain, R3 knee:/ }).click()
    await page.getByRole('button', { name: 'Give to the whole family' }).click()
    await expect.poll(() => familyValue('positionGain'), soon).toBe(own)
    expect(await jointValues('r3-knee')).not.toHaveProperty('positionGain')
    await page.getByRole('button', { name: 'undo' }).click()
    await expect.poll(async () => (await jointValues('r3-knee')).positionGain, soon).toBe(own)
    await page.getByRole('link', { name: 'cascade', exact: true }).click()
    await page.getByRole('button', { name: /^(back to released|set back to family).*Position gain/ }).click()
    await expect.poll(() => jointValues('r3-knee'), soon).not.toHaveProperty('positionGain')
  })
})

describe('the table', () => {
  it('is edited by pointer, and fills a value to the joints chosen', async () => {
    await at('?view=table&family=knee&columns=family')
    await page.getByRole('gridcell', { name: /^Velocity gain, L2 knee:/ }).dblclick()
    await page.getByRole('textbox', { name: 'Velocity gain, L2 knee' }).fill('3.4')
    await page.getByRole('gridcell', { name: /^Position gain, Knee family/ }).click()
    await expect.poll(async () => (await jointValues('l2-knee')).velocityGain, soon).toBe(3.4)
    await page.getByRole('gridcell', { name: /^Velocity gain, L2 knee: 3.4/ }).click()
    await page.getByRole('button', { name: 'Fill to joints…' }).click()
    const dialog = page.locator('dialog[open]')
    await dialog.getByRole('checkbox', { name: 'L3 knee' }).check()
    await dialog.getByRole('checkbox', { name: 'R1 knee' }).check()
    expect(await faultsOf(page, 'fill')).toEqual([])
    await dialog.getByRole('button', { name: 'Fill 2 places' }).click()
    await expect.poll(async () => [(await jointValues('l3-knee')).velocityGain, (await jointValues('r1-knee')).velocityGain], soon).toEqual([3.4, 3.4])
    await page.getByRole('button', { name: 'undo' }).click()
    await expect.poll(() => jointValues('l3-knee'), soon).not.toHaveProperty('velocityGain')
  })
})

it('threw no error on any page', () => expect(errors).toEqual([]))
