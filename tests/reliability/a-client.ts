import { randomUUID } from 'node:crypto'
import type { Me } from '../../shared/contract/people.ts'
import { emailOf } from './people-and-machine.ts'

export const password = 'a long enough password'

export interface Answered {
  status: number
  body: Record<string, unknown>
}

/** A signed-in person over HTTP; the session lives in the database, so it outlives the process that began it. */
export class Client {
  private readonly cookie: string
  private readonly token: string

  private constructor(cookie: string, token: string) {
    this.cookie = cookie
    this.token = token
  }

  static async signIn(port: number, name: string): Promise<Client> {
    const signedIn = await fetch(`http://127.0.0.1:${port}/api/session`, { method: 'POST', headers: { 'Content-Type': 'application/json' }, body: JSON.stringify({ email: emailOf(name), password }) })
    // the answer ends when the session is stored, not when its head arrives
    const text = await signedIn.text()
    if (signedIn.status !== 200) throw new Error(`${name} could not sign in: ${text}`)
    const cookie = signedIn.headers.getSetCookie().map((c) => c.split(';')[0]).join('; ')
    const me = (await (await fetch(`http://127.0.0.1:${port}/api/me`, { headers: { Cookie: cookie } })).json()) as Me
    return new Client(cookie, me.token)
  }

  private async send(port: number, method: string, path: string, headers: Record<string, string>, body?: string | FormData): Promise<Answered> {
    const response = await fetch(`http://127.0.0.1:${port}/api${path}`, { method, headers: { Cookie: this.cookie, 'X-Detent-Token': this.token, ...headers }, body })
    const text = await response.text()
    return { status: response.status, body: (text.startsWith('{') || text.startsWith('[') ? JSON.parse(text) : { text }) as Record<string, unknown> }
  }

  get = (port: number, path: string) => this.send(port, 'GET', path, {})

  /** @param key  Idempotency-Key; the same one again for a repeat */
  act = (port: number, method: string, path: string, body: object, { ifMatch, key = randomUUID() }: { ifMatch?: number; key?: string } = {}) =>
    this.send(port, method, path, { 'Content-Type': 'application/json', 'Idempotency-Key': key, ...(ifMatch === undefined ? {} : { 'If-Match': `"${ifMatch}"` }) }, JSON.stringify(body))

  upload = (port: number, path: string, field: string, bytes: Uint8Array, { ifMatch, key = randomUUID() }: { ifMatch: number; key?: string }) => {
    const form = new FormData()
    form.append(field, new Blob([new Uint8Array(bytes)]), 'hinge.bin')
    return this.send(port, 'PUT', path, { 'Idempotency-Key': key, 'If-Match': `"${ifMatch}"` }, form)
  }
}

/** @throws Error with the problem's words when the answer has another status */
export function must(answered: Answered, status: number): Record<string, unknown> {
  if (answered.status !== status) throw new Error(`expected ${status}, got ${answered.status}: ${JSON.stringify(answered.body)}`)
  return answered.body
}
