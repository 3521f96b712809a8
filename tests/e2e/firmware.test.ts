import { spawnSync } from 'node:child_process'
import { mkdirSync, mkdtempSync, readFileSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { dirname, join } from 'node:path'
import { unzipSync } from 'fflate'
import type { BrowserContext, Cookie, Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest'
import { demoSignIns } from '../../server/modules/people/demo-sign-ins.ts'
import { faultsOf } from './axe.ts'
import { openBrowser } from './chromium.ts'
import { startServer, type RunningServer } from './server.ts'

const folder = mkdtempSync(join(tmpdir(), 'detent-firmware-'))

let server: RunningServer
let browser: BrowserContext
let page: Page
const errors: string[] = []
const sessions = new Map<string, Cookie[]>()

async function signIn(name: string) {
  await browser.clearCookies()
  const known = sessions.get(name)
  if (known) return browser.addCookies(known)
  const { email, password } = demoSignIns.find((d) => d.name === name)!
  expect((await browser.request.post(`${server.url}/api/session`, { data: { email, password } })).status()).toBe(200)
  sessions.set(name, await browser.cookies())
}

const passwordOf = (name: string) => demoSignIns.find((d) => d.name === name)!.password
const go = (path: string) => page.goto(`${server.url}${path}`)
const answer = async <T>(path: string) => (await (await browser.request.get(`${server.url}/api${path}`)).json()) as T
const button = (name: string | RegExp) => page.getByRole('button', { name })
const dialog = () => page.locator('dialog[open]')

const faults = () => faultsOf(page, new URL(page.url()).pathname)

interface Schema {
  $id: string
  title: string
  properties: Record<string, { 'x-register'?: { address: number } }>
  'x-carry': object
}

/** hinge 2.1.0 as 2.2.0: one parameter under another name, one moved into a gap, one new. */
function nextSchema(text: string): Schema {
  const schema = JSON.parse(text) as Schema
  const { busWatchdog, ...rest } = schema.properties
  rest.lampBrightness['x-register']!.address = 0x4b
  const added = { title: 'Foot heater', description: 'Share of the supply for the heater at the foot.', type: 'number', minimum: 0, maximum: 1, default: 0, 'x-register': { address: 0x2e, encoding: 'uq0.16' } }
  return { ...schema, title: 'hinge 2.2.0', $id: 'urn:detent:firmware:hinge:2.2.0', 'x-carry': { from: '2.1.0', renames: { busWatchdog: 'watchdogTime' }, units: {}, defaults: { footHeater: 0 }, dropped: [] }, properties: { ...rest, watchdogTime: busWatchdog, footHeater: added } }
}

/** Writes the whole text of the schema editor anew, as from a clipboard. */
async function writeSchema(text: string) {
  const editor = page.locator('.monaco-editor').first()
  await editor.waitFor()
  await editor.click()
  await page.keyboard.press('Control+A')
  await page.evaluate((t) => navigator.clipboard.writeText(t), text)
  await page.keyboard.press('Control+V')
}

beforeAll(async () => {
  server = await startServer()
  browser = await openBrowser()
  await browser.grantPermissions(['clipboard-read', 'clipboard-write'])
  page = browser.pages()[0]
  page.setDefaultTimeout(15_000)
  page.on('pageerror', (error) => errors.push(error.message))
})
afterEach(() => page.emulateMedia({ media: 'screen', colorScheme: 'light' }))
afterAll(async () => {
  await browser?.close()
  await server?.stop()
})

describe('a firmware version, from its schema to a board', () => {
  it('is drafted by an engineer; a schema whose registers overlap is not saved, and the line is named', async () => {
    await signIn('Mirela Castanho')
    await go('/firmware')
    expect(await faults()).toEqual([])
    await button('Draft a version…').last().click()
    await dialog().getByRole('textbox', { name: 'Version' }).fill('2.2.0')
    await dialog().getByRole('button', { name: 'Draft it' }).click()
    await page.waitForURL(/\/firmware\/hinge\/2\.2\.0\?view=schema/)
    const { schemaText } = await answer<{ schemaText: string }>('/firmware/hinge/2.1.0')
    const schema = nextSchema(schemaText)
    const overlapping = structuredClone(schema)
    overlapping.properties.lampBrightness['x-register']!.address = 0x38
    await writeSchema(JSON.stringify(overlapping, null, 2))
    await page.getByText('1 place to correct').waitFor()
    await page.getByText(/overlaps/).first().waitFor()
    await writeSchema(JSON.stringify(schema, null, 2))
    await page.getByText('reads well; not saved yet').waitFor()
    await button('Save the draft').click()
    await page.getByText(/^saved \d/).waitFor()
    expect(await faults()).toEqual([])
  })

  it('is given its firmware image; its map is walked with the keyboard alone', async () => {
    await go('/firmware/hinge/2.2.0')
    await page.getByLabel('firmware image file').setInputFiles({ name: 'hinge-2.2.0.hex', mimeType: 'application/octet-stream', buffer: Buffer.from(':0400000001020304F3\n:00000001FF\n') })
    await page.getByText('Line 1 ends with the checksum F3; its bytes give F2.').first().waitFor()
    await page.getByLabel('firmware image file').setInputFiles({ name: 'hinge-2.2.0.bin', mimeType: 'application/octet-stream', buffer: Buffer.from('a firmware of the test') })
    await page.getByText('hinge-2.2.0.bin').first().waitFor()
    const map = page.getByRole('group', { name: /register map/ })
    await map.locator('[tabindex="0"]').focus()
    for (const key of ['End', 'ArrowLeft', 'Home', 'ArrowRight', 'ArrowRight']) await page.keyboard.press(key)
    expect(await page.evaluate(() => document.activeElement?.getAttribute('aria-label'))).toContain('Bus address')
    await page.keyboard.press('Enter')
    await page.waitForURL(/parameter=busAddress/)
    expect(await faults()).toEqual([])
    expect(await button('Publish…').getAttribute('aria-disabled')).toBe('true')
  })

  it('is published by another release manager, and compared with the one before', async () => {
    await signIn('Hedda Lindqvist')
    await go('/firmware/hinge/2.2.0')
    await button('Publish…').click()
    await dialog().getByRole('textbox', { name: 'Your password' }).or(dialog().locator('input[type=password]')).first().fill(passwordOf('Hedda Lindqvist'))
    await button('Sign and publish').click()
    await page.getByText('published', { exact: true }).first().waitFor()
    await page.getByRole('link', { name: 'Compare…' }).click()
    await page.waitForURL(/compare\?from=2\.1\.0&to=2\.2\.0/)
    const main = page.getByRole('main')
    for (const words of ['watchdogTime', 'was busWatchdog', 'lampBrightness', 'footHeater', 'busWatchdog becomes watchdogTime']) await main.getByText(words).first().waitFor()
    expect(await faults()).toEqual([])
  })
})

describe('inside a change', () => {
  let change: string

  it('a family is carried over by keyboard, after a look at what alters; a joint alone is told what its family keeps', async () => {
    await signIn('Mirela Castanho')
    await go('/machines/dunlin')
    await button('Draft a change…').click()
    await dialog().getByRole('textbox', { name: 'Title' }).fill('Hips on hinge 2.2.0')
    await dialog().getByRole('button', { name: 'Draft it' }).click()
    await page.waitForURL(/\/changes\/dunlin-\d+/)
    change = new URL(page.url()).pathname.split('/')[2]
    const open = button('Carry over to another firmware…')
    await open.focus()
    await page.keyboard.press('Enter')
    await dialog().getByRole('combobox', { name: 'What moves' }).selectOption({ label: 'R1 hip alone' })
    await dialog().getByRole('combobox', { name: 'To' }).selectOption('hinge 2.2.0')
    await dialog().getByText(/is called watchdogTime in the new version, but .* still needs it/).waitFor()
    await dialog().getByRole('combobox', { name: 'What moves' }).selectOption({ label: 'Hip, 6 joints' })
    await dialog().getByRole('combobox', { name: 'To' }).selectOption('hinge 2.2.0')
    await dialog().getByRole('region', { name: 'what alters' }).getByText('watchdogTime').first().waitFor()
    expect(await faults()).toEqual([])
    await dialog().getByRole('button', { name: 'Accept into the draft' }).click()
    await dialog().waitFor({ state: 'detached' })
    const { set } = await answer<{ set: { joints: Record<string, { name: string; firmware: string }> } }>(`/changes/${change}`)
    const moved = Object.values(set.joints).filter((j) => j.firmware === 'hinge 2.2.0')
    expect(moved.map((j) => j.name)).toEqual(['L1', 'R1', 'L2', 'R2', 'L3', 'R3'].map((leg) => `${leg} hip`))
    expect(await open.evaluate((b) => b === document.activeElement)).toBe(true)
  })

  it('its author takes a bench image, marked, for one board; an observer sees no way to', async () => {
    await expect.poll(async () => (await button('Bench image…').getAttribute('aria-disabled')) ?? 'false').toBe('false')
    await button('Bench image…').click()
    await dialog().getByText('UNRELEASED – bench only').waitFor()
    await dialog().getByRole('combobox', { name: 'Joint' }).selectOption('r1-hip')
    const board = dialog().getByRole('textbox', { name: 'Board, serial number' })
    const own = await board.inputValue()
    await board.fill('H-0777')
    await dialog().getByRole('button', { name: 'Take the image' }).click()
    await dialog().getByText(`the draft's values belong to ${own}`).first().waitFor()
    await board.fill(own)
    expect(await faults()).toEqual([])
    const waiting = page.waitForEvent('download')
    await dialog().getByRole('button', { name: 'Take the image' }).click()
    expect((await waiting).suggestedFilename()).toBe(`UNRELEASED-bench-only_dunlin_r1-hip_${own}.bin`)
    await signIn('Yuna Brandt')
    await go(`/changes/${change}`)
    await page.getByText('Read only:').waitFor()
    expect(await button('Bench image…').count() + (await button('Carry over to another firmware…').count())).toBe(0)
  })
})

describe('a release at the bench', () => {
  let version: string

  it('gives a kit that proves itself by the lines of its own README, under the key of the keys page', async () => {
    await signIn('Pascoe Adeyemi')
    version = (await answer<{ version: string; state: string }[]>('/releases?machine=teasel')).find((r) => r.state === 'current')!.version
    await go('/keys')
    expect(await faults()).toEqual([])
    const known = ((await page.getByRole('main').textContent()) ?? '').replaceAll(/\s/g, '')
    await go(`/machines/teasel/releases/${version}`)
    await page.getByText('signed content').first().waitFor()
    expect(await faults()).toEqual([])
    const waiting = page.waitForEvent('download')
    await button(/Download the kit/).click()
    const path = join(folder, 'kit.zip')
    await (await waiting).saveAs(path)
    const kit = join(folder, 'kit')
    for (const [name, bytes] of Object.entries(unzipSync(readFileSync(path)))) {
      mkdirSync(dirname(join(kit, name)), { recursive: true })
      writeFileSync(join(kit, name), bytes)
    }
    const lines = readFileSync(join(kit, 'README.txt'), 'utf8').split('\n').map((l) => l.trim()).filter((l) => /^(openssl|sha256sum) /.test(l))
    expect(lines).toHaveLength(4)
    const said = lines.map((line) => spawnSync('bash', ['-c', `set -o pipefail; ${line}`], { cwd: kit, encoding: 'utf8' }))
    expect(said.map((s) => ({ status: s.status, stderr: s.stderr }))).toEqual(lines.map(() => ({ status: 0, stderr: '' })))
    expect(known).toContain(said[0].stdout.slice(0, 64))
    expect(said[1].stdout + said[2].stdout).toBe('Signature Verified Successfully\n'.repeat(2))
    expect(said[3].stdout.trim().split('\n').every((l) => l.endsWith(': OK'))).toBe(true)
    // one flipped bit in the manifest, and the same lines refuse it
    const manifest = readFileSync(join(kit, 'manifest.json'))
    manifest[10] ^= 1
    writeFileSync(join(kit, 'manifest.json'), manifest)
    expect(lines.slice(2).map((line) => spawnSync('bash', ['-c', line], { cwd: kit }).status)).not.toContain(0)
  })

  it('tells by a read-back what a board holds otherwise, in units and bytes', async () => {
    const boards = (await answer<{ boards: { serial: string; release: string | null; state: string; joint: { key: string } | null }[] }>('/boards?machine=teasel')).boards
    const board = boards.find((b) => b.release === version && b.state === 'current' && b.joint)!
    const taken = await browser.request.get(`${server.url}/api/machines/teasel/releases/${version}/joints/${board.joint!.key}/image.bin?board=${board.serial}`)
    const dump = await taken.body()
    // current limit of hinge, 0x38, 1 mA a step: 1 A
    dump.writeUInt16LE(1000, 0x38)
    await go(`/boards/${board.serial}`)
    await button('Read back…').click()
    await dialog().locator('input[type=file]').setInputFiles({ name: 'dump.bin', mimeType: 'application/octet-stream', buffer: dump })
    await button('Compare and record').click()
    await dialog().getByText('Current limit').first().waitFor()
    await dialog().getByText(/E8 03/).first().waitFor()
    expect(await faults()).toEqual([])
    await button('Close').click()
    await page.getByText('read-back differs').first().waitFor()
  })

  it('is compared with the one before by value, by register and as text', async () => {
    await signIn('Mirela Castanho')
    for (const by of ['', '&by=register', '&by=text']) {
      await go(`/compare?a=release:dunlin@1.3.1&b=release:dunlin@1.4.0${by}`)
      await page.getByText('sequence number').first().waitFor()
      expect(await faults()).toEqual([])
    }
    await page.setViewportSize({ width: 360, height: 800 })
    for (const path of ['/firmware', '/firmware/hinge/2.2.0', '/firmware/hinge/compare?from=2.1.0&to=2.2.0', '/compare?a=release:dunlin@1.3.1&b=release:dunlin@1.4.0', '/keys', '/machines/dunlin/releases/1.4.0']) {
      await go(path)
      await page.getByRole('main').getByRole('heading').first().waitFor()
      expect(await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)).toBe(0)
      expect(await faults()).toEqual([])
    }
  })

  it('threw no error on any page', () => expect(errors).toEqual([]))
})
