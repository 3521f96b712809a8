import { demoSignIns } from '../../server/modules/people/demo-sign-ins.ts'
import { paths } from '../../src/app/paths.ts'
import type { BrowserContext, Page } from 'playwright-core'

/** One screen of the demo workplace: a fitting reader, null where nobody is signed in, and its address. */
export interface Screen {
  by: string | null
  at: string
  /** narrower than this, it says so and leaves the work to a wider window (look.md's layout, 1024 px for the editor) */
  wants?: number
}

const [mirela, rafiq, hedda, pascoe, yuna, silvan] = ['Mirela Castanho', 'Rafiq Sandoval', 'Hedda Lindqvist', 'Pascoe Adeyemi', 'Yuna Brandt', 'Silvan Okoro']

/** Every address of the client. The type asks for one that is new. */
export const screens: Record<keyof typeof paths, Screen> = {
  desk: { by: rafiq, at: paths.desk() },
  signIn: { by: null, at: paths.signIn() },
  forgotten: { by: null, at: paths.forgotten() },
  link: { by: null, at: paths.link('a-link-that-nobody-was-sent') },
  account: { by: pascoe, at: paths.account() },
  people: { by: silvan, at: paths.people() },
  person: { by: silvan, at: paths.person(3) },
  mail: { by: silvan, at: paths.mail() },
  ledger: { by: yuna, at: paths.ledger() },
  ledgerEntry: { by: yuna, at: paths.ledgerEntry(3) },
  policy: { by: hedda, at: paths.policy('dunlin') },
  machines: { by: silvan, at: paths.machines() },
  machine: { by: yuna, at: paths.machine('dunlin') },
  bus: { by: yuna, at: paths.bus('dunlin', 'aft') },
  joint: { by: yuna, at: paths.joint('dunlin', 'r3-knee') },
  evidence: { by: yuna, at: paths.evidence('dunlin', 1) },
  family: { by: yuna, at: paths.family('dunlin', 'knee') },
  firmware: { by: mirela, at: paths.firmware() },
  firmwareComparison: { by: mirela, at: paths.firmwareComparison('hinge', { from: '2.0.0', to: '2.1.0' }) },
  firmwareVersion: { by: mirela, at: paths.firmwareVersion('hinge', '2.1.0') },
  changes: { by: mirela, at: paths.changes() },
  change: { by: mirela, at: paths.change('dunlin-12'), wants: 1024 },
  changeCheck: { by: hedda, at: paths.changeCheck('dunlin-11') },
  changeReview: { by: hedda, at: paths.changeReview('dunlin-11') },
  releases: { by: pascoe, at: paths.releases() },
  release: { by: pascoe, at: paths.release('dunlin', '1.4.0') },
  compare: { by: rafiq, at: paths.compare({ a: 'release:dunlin@1.3.0', b: 'release:dunlin@1.4.0' }) },
  help: { by: mirela, at: paths.help() },
  apiReference: { by: mirela, at: paths.apiReference() },
  keys: { by: silvan, at: paths.keys() },
  backups: { by: silvan, at: paths.backups() },
  boards: { by: pascoe, at: paths.boards() },
  board: { by: pascoe, at: paths.board('H-0310') },
  audit: { by: pascoe, at: paths.audit('dunlin') },
  bench: { by: pascoe, at: paths.bench('dunlin', { joint: 'l1-knee' }) },
  benchCard: { by: pascoe, at: paths.benchCard('dunlin', '1.4.0', 'l1-knee') },
  search: { by: mirela, at: paths.search('knee') },
}

/** Dialogs, by the screen they open on and the words of their button. */
export const dialogs: { by: string; at: string; press: string }[] = [
  { by: silvan, at: paths.people(), press: 'Invite' },
  { by: silvan, at: paths.machines(), press: 'Make a machine' },
  { by: silvan, at: paths.policy('dunlin'), press: 'Propose' },
  { by: yuna, at: paths.ledger(), press: 'Checkpoints' },
  { by: mirela, at: paths.machine('dunlin'), press: 'Draft a change' },
  { by: mirela, at: paths.firmware(), press: 'Draft' },
  { by: hedda, at: paths.release('dunlin', '1.4.0'), press: 'Withdraw' },
  { by: pascoe, at: paths.boards(), press: 'Import' },
  { by: rafiq, at: paths.changeReview('dunlin-10'), press: 'Return' },
]

/** Signs in without the page, as fast as the server answers; the sign-in page has its own tests. */
export async function signInAs(browser: BrowserContext, url: string, name: string | null) {
  await browser.clearCookies()
  if (name === null) return
  const { email, password } = demoSignIns.find((d) => d.name === name)!
  const answer = await browser.request.post(`${url}/api/session`, { data: { email, password } })
  if (!answer.ok()) throw new Error(`${name} could not sign in: ${answer.status()}`)
}

/** Opens a screen and waits until nothing on it waits. */
export async function show(page: Page, address: string) {
  await page.goto(address, { waitUntil: 'domcontentloaded' })
  await page.waitForFunction(() => document.querySelector('main h1, h1') !== null && document.querySelector('.waiting, [aria-busy="true"]') === null, undefined, { timeout: 30_000 })
  await page.evaluate(() => document.fonts.ready.then(() => true))
}
