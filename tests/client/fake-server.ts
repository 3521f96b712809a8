import { vi } from 'vitest'
import type { Me } from '../../shared/contract/people.ts'

export interface Asked {
  method: string
  /** without /api */
  path: string
  body: unknown
  headers: Record<string, string>
}

type Reply = unknown | ((asked: Asked) => unknown)

/** A refusal, as the server writes it. */
export const problem = (status: number, code: string, detail: string, extra: Record<string, unknown> = {}) => ({ problem: true as const, status, body: { type: `/problems/${code}`, title: `title of ${code}`, status, detail, errors: [], ...extra } })

export const notSignedIn = problem(401, 'not-signed-in', 'Sign in first; nothing was done.')

const isProblem = (v: unknown): v is ReturnType<typeof problem> => typeof v === 'object' && v !== null && 'problem' in v

/**
 * Stands in for the API: replies by "METHOD /path?query" (the query may be left out), keeps what was asked. A reply may be a function of
 * what was asked; one that throws is a network without an answer. What nobody foresaw is answered 404.
 */
export function fakeServer(replies: Record<string, Reply>) {
  const asked: Asked[] = []
  vi.stubGlobal('fetch', async (url: string, init: RequestInit = {}) => {
    const one: Asked = { method: init.method ?? 'GET', path: url.replace(/^\/api/, ''), body: typeof init.body === 'string' ? JSON.parse(init.body) : undefined, headers: (init.headers ?? {}) as Record<string, string> }
    asked.push(one)
    const found = replies[`${one.method} ${one.path}`] ?? replies[`${one.method} ${one.path.split('?')[0]}`]
    const reply = found === undefined ? problem(404, 'not-found', `Nothing answers ${one.method} ${one.path}.`) : typeof found === 'function' ? (found as (a: Asked) => unknown)(one) : found
    return isProblem(reply) ? new Response(JSON.stringify(reply.body), { status: reply.status }) : new Response(reply === undefined ? '' : JSON.stringify(reply), { status: 200 })
  })
  return {
    asked,
    replies,
    /** the acts asked for, readings left out */
    acts: () => asked.filter((a) => a.method !== 'GET'),
  }
}

export const aMe = (over: Partial<Me> = {}): Me => ({
  id: 1,
  name: 'Silvan Okoro',
  email: 'silvan.okoro@dunlin.example',
  roles: [{ id: 1, role: 'administrator', machine: null, confirmed: true }],
  signingHold: null,
  secondFactor: { since: null, recoveryCodesLeft: 0, missing: false, rule: 'optional' },
  acts: { '*': ['read', 'make machines', 'propose policy', 'keep people', 'keep mail'] },
  token: 'token-of-silvan',
  ...over,
})

export const anEngineer = aMe({ id: 2, name: 'Mirela Castanho', email: 'mirela.castanho@dunlin.example', roles: [{ id: 2, role: 'controls engineer', machine: null, confirmed: true }], acts: { '*': ['read', 'draft changes', 'draft firmware'] }, token: 'token-of-mirela' })
