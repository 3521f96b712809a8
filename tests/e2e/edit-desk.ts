import type { BrowserContext, Page } from 'playwright-core'
import { demoSignIns } from '../../server/modules/people/demo-sign-ins.ts'
import type { ChangeView } from '../../shared/contract/changes.ts'

/** One person's way to the API, for what a test needs around the pages it is about. */
export interface Api {
  get<T>(path: string): Promise<T>
  act<T>(method: string, path: string, body?: object, revision?: number): Promise<T>
  cookies: { name: string; value: string }[]
}

/** Signs in by HTTP. @throws Error with what the server answered */
export async function apiOf(url: string, name: string): Promise<Api> {
  const { email, password } = demoSignIns.find((d) => d.name === name)!
  const signedIn = await fetch(`${url}/api/session`, { method: 'POST', headers: { 'Content-Type': 'application/json' }, body: JSON.stringify({ email, password }) })
  if (!signedIn.ok) throw new Error(`${name}: ${signedIn.status} ${await signedIn.text()}`)
  const cookies = signedIn.headers.getSetCookie().map((c) => {
    const [, key, value] = /^([^=]+)=([^;]*)/.exec(c)!
    return { name: key, value }
  })
  const cookie = cookies.map((c) => `${c.name}=${c.value}`).join('; ')
  const ask = (path: string, init: RequestInit = {}) => fetch(`${url}/api${path}`, { ...init, headers: { cookie, 'Content-Type': 'application/json', ...init.headers } })
  const bodyOf = async (answer: Response, what: string) => {
    if (!answer.ok) throw new Error(`${what}: ${answer.status} ${await answer.text()}`)
    return answer.json() as Promise<never>
  }
  const { token } = (await bodyOf(await ask('/me'), 'me')) as { token: string }
  return {
    cookies,
    get: async (path) => bodyOf(await ask(path), path),
    act: async (method, path, body = {}, revision) => bodyOf(await ask(path, { method, body: JSON.stringify(body), headers: { 'X-Detent-Token': token, ...(revision === undefined ? {} : { 'If-Match': `"${revision}"` }) } }), `${method} ${path}`),
  }
}

/** The browser as this person, without the sign-in page. */
export async function actAs(browser: BrowserContext, url: string, api: Api): Promise<void> {
  await browser.clearCookies()
  await browser.addCookies(api.cookies.map((c) => ({ ...c, url })))
}

/** A draft of Mirela Castanho's, with its reason. */
export async function draftOf(api: Api, title: string, machine = 'dunlin'): Promise<string> {
  return (await api.act<{ key: string }>('POST', '/changes', { machine, title, reason: 'Tried on the flats.' })).key
}

export const changeOf = (api: Api, key: string) => api.get<ChangeView>(`/changes/${key}`)

/** Presses Tab until an element with this name has the focus; the keyboard alone leads there. */
export async function tabTo(page: Page, name: RegExp, most = 160): Promise<void> {
  for (let k = 0; k < most; k += 1) {
    await page.keyboard.press('Tab')
    const at = await page.evaluate(() => {
      const a = document.activeElement as HTMLElement | null
      const label = a?.getAttribute('aria-label') ?? (a as HTMLInputElement | null)?.labels?.[0]?.textContent ?? a?.textContent ?? ''
      return label.trim()
    })
    if (name.test(at)) return
  }
  throw new Error(`no element named ${String(name)} is reached with ${most} presses of Tab`)
}
