import { QueryClient, QueryClientProvider } from '@tanstack/react-query'
import { cleanup, configure, render } from '@testing-library/react'
import { Component, Suspense } from 'react'
import type { ReactNode } from 'react'
import { MemoryRouter, Route, Routes, useLocation } from 'react-router'
import { afterEach, vi } from 'vitest'
import type { Me } from '../../shared/contract/people.ts'
import { ToastHost } from '../../src/components/ui/toast-host.tsx'
import { Component as ChangeCheck } from '../../src/routes/change-check.tsx'
import { Component as ChangeReview } from '../../src/routes/change-review.tsx'
import { Component as Change } from '../../src/routes/change.tsx'
import { Component as Changes } from '../../src/routes/changes.tsx'
import { Component as Desk } from '../../src/routes/desk.tsx'
import { Component as Release } from '../../src/routes/release.tsx'
import { Component as Releases } from '../../src/routes/releases.tsx'
import { rawSchemas } from './a-change.ts'

// The pages are large: whether each ancestor is hidden is not asked anew for every role.
configure({ defaultHidden: true, asyncUtilTimeout: 20_000 })

export interface Asked {
  method: string
  path: string
  body: unknown
  ifMatch: string | null
}

interface Answer {
  status?: number
  body: unknown
  headers?: Record<string, string>
}

/** An answer: JSON with 200, or a refusal as a problem document. */
export type Reply = Answer | ((asked: Asked) => Answer)

export const refusal = (status: number, code: string, detail: string, extra: object = {}): Reply => ({ status, body: { type: `/problems/${code}`, title: code, status, detail, errors: [], ...extra } })

export const mirela: Me = { id: 7, name: 'Mirela Castanho', email: 'mirela@dunlin.example', roles: [{ id: 1, role: 'controls engineer', machine: null, confirmed: true }], signingHold: null, secondFactor: { since: null, recoveryCodesLeft: 0, missing: false, rule: 'optional' }, acts: { '*': [], dunlin: ['read', 'draft changes'], teasel: ['read', 'draft changes'] }, token: 'token' }
export const rafiq: Me = { ...mirela, id: 8, name: 'Rafiq Sandoval', roles: [{ id: 2, role: 'peer reviewer', machine: null, confirmed: true }, { id: 3, role: 'release manager', machine: null, confirmed: true }], acts: { '*': [], dunlin: ['read', 'sign peer review', 'sign release'], teasel: ['read', 'sign peer review', 'sign release'] } }

const machines = [
  { key: 'dunlin', name: 'Dunlin', description: '', retired: false, joints: 3, buses: 2, currentVersion: '1.7.0', openChanges: 1 },
  { key: 'teasel', name: 'Teasel', description: '', retired: false, joints: 6, buses: 1, currentVersion: '1.1.0', openChanges: 0 },
]

/** The API as a table of replies, and what was asked of it. */
export function anApi(me: Me, replies: Record<string, Reply>) {
  const asked: Asked[] = []
  const table: Record<string, Reply> = {
    'GET /me': { body: me },
    'GET /machines': { body: machines },
    'GET /people': { body: { people: [], may: { invite: { allowed: false, why: '' } } } },
    'GET /firmware': { body: [] },
    'GET /ledger': { body: { entries: [], next: null, total: 0, acts: [] } },
    'GET /changes/dunlin-47/schemas': { body: rawSchemas },
    ...replies,
  }
  vi.stubGlobal('fetch', (url: string, init: RequestInit = {}) => {
    const path = url.replace(/^\/api/, '')
    const one: Asked = { method: init.method ?? 'GET', path, body: typeof init.body === 'string' ? JSON.parse(init.body) : undefined, ifMatch: new Headers(init.headers).get('If-Match') }
    asked.push(one)
    const reply = table[`${one.method} ${path}`] ?? table[`${one.method} ${path.split('?')[0]}`]
    const { status = 200, body, headers = {} }: Answer = reply === undefined ? { status: 404, body: { type: '/problems/not-found', title: 'Not found', detail: `nothing at ${path}`, errors: [] } } : typeof reply === 'function' ? reply(one) : reply
    return Promise.resolve(new Response(JSON.stringify(body), { status, headers: { 'Content-Type': status < 400 ? 'application/json' : 'application/problem+json', ...headers } }))
  })
  return { asked, table, acts: () => asked.filter((a) => a.method !== 'GET') }
}

let where = ''
/** The address that the page shows now. */
export const address = () => where

/** Stands where the router's own error page would. */
class Failed extends Component<{ children: ReactNode }, { failed: boolean }> {
  override state = { failed: false }
  static getDerivedStateFromError = () => ({ failed: true })
  override render() {
    return this.state.failed ? 'the page failed' : this.props.children
  }
}

function Address() {
  const { pathname, search } = useLocation()
  where = pathname + search
  return null
}

/** Opens a page of the client at an address. */
export function open(at: string) {
  const client = new QueryClient({ defaultOptions: { queries: { retry: false, staleTime: 10_000 } } })
  return render(
    <QueryClientProvider client={client}>
      <ToastHost>
        <MemoryRouter initialEntries={[at]}>
          <Address />
          <Failed>
          <Suspense fallback="waiting">
            <Routes>
              <Route path="/" element={<Desk />} />
              <Route path="/changes" element={<Changes />} />
              <Route path="/changes/:change" element={<Change />} />
              <Route path="/changes/:change/check" element={<ChangeCheck />} />
              <Route path="/changes/:change/review" element={<ChangeReview />} />
              <Route path="/releases" element={<Releases />} />
              <Route path="/machines/:machine/releases/:version" element={<Release />} />
            </Routes>
          </Suspense>
          </Failed>
        </MemoryRouter>
      </ToastHost>
    </QueryClientProvider>,
  )
}

afterEach(() => {
  cleanup()
  vi.unstubAllGlobals()
  localStorage.clear()
})
