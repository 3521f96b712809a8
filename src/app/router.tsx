import { createBrowserRouter, createMemoryRouter } from 'react-router'
import type { RouteObject } from 'react-router'
import { PageError, RootError } from './root-error.tsx'
import { SignedInLayout, signedInLoader } from './signed-in-layout.tsx'
import { FirstWait } from './first-wait.tsx'

/** Pages for those signed in; each is its own chunk, loaded when first opened. */
const pages: RouteObject[] = [
  { index: true, lazy: () => import('../routes/desk.tsx') },
  { path: 'changes', lazy: () => import('../routes/changes.tsx') },
  { path: 'changes/:change', lazy: () => import('../routes/change.tsx') },
  { path: 'changes/:change/check', lazy: () => import('../routes/change-check.tsx') },
  { path: 'changes/:change/review', lazy: () => import('../routes/change-review.tsx') },
  { path: 'releases', lazy: () => import('../routes/releases.tsx') },
  { path: 'machines/:machine/releases/:version', lazy: () => import('../routes/release.tsx') },
  { path: 'machines/:machine/releases/:version/joints/:joint/card', lazy: () => import('../routes/bench-card.tsx') },
  { path: 'boards', lazy: () => import('../routes/boards.tsx') },
  { path: 'boards/:serial', lazy: () => import('../routes/board.tsx') },
  { path: 'machines/:machine/audit', lazy: () => import('../routes/audit.tsx') },
  { path: 'machines/:machine/bench', lazy: () => import('../routes/bench.tsx') },
  { path: 'account', lazy: () => import('../routes/account.tsx') },
  { path: 'people', lazy: () => import('../routes/people.tsx') },
  { path: 'people/:person', lazy: () => import('../routes/person.tsx') },
  { path: 'backups', lazy: () => import('../routes/backups.tsx') },
  { path: 'mail', lazy: () => import('../routes/mail.tsx') },
  { path: 'ledger', lazy: () => import('../routes/ledger.tsx') },
  { path: 'policy', lazy: () => import('../routes/policy.tsx') },
  { path: 'machines', lazy: () => import('../routes/machines.tsx') },
  { path: 'machines/:machine', lazy: () => import('../routes/machine.tsx') },
  { path: 'machines/:machine/bus/:bus', lazy: () => import('../routes/bus.tsx') },
  { path: 'machines/:machine/joints/:joint', lazy: () => import('../routes/joint.tsx') },
  { path: 'machines/:machine/evidence/:evidence', lazy: () => import('../routes/evidence.tsx') },
  { path: 'machines/:machine/families/:family', lazy: () => import('../routes/family.tsx') },
  { path: 'firmware', lazy: () => import('../routes/firmware.tsx') },
  { path: 'firmware/:line/compare', lazy: () => import('../routes/firmware-compare.tsx') },
  { path: 'firmware/:line/:version', lazy: () => import('../routes/firmware-version.tsx') },
  { path: 'compare', lazy: () => import('../routes/compare.tsx') },
  { path: 'keys', lazy: () => import('../routes/keys.tsx') },
  { path: 'help', lazy: () => import('../routes/help.tsx') },
  { path: 'api-reference', lazy: () => import('../routes/api-reference.tsx') },
  { path: 'search', lazy: () => import('../routes/search.tsx') },
]

export const routes: RouteObject[] = [
  {
    ErrorBoundary: RootError,
    HydrateFallback: FirstWait,
    children: [
      { path: '/sign-in', lazy: () => import('../routes/sign-in.tsx') },
      { path: '/forgotten', lazy: () => import('../routes/forgotten.tsx') },
      { path: '/links/:secret', lazy: () => import('../routes/link.tsx') },
      {
        path: '/',
        Component: SignedInLayout,
        loader: signedInLoader,
        // The layout's own reading does not hang on the page inside it.
        shouldRevalidate: () => false,
        children: [
          {
            ErrorBoundary: PageError,
            children: [...pages, { path: '*', lazy: () => import('../routes/nowhere.tsx') }],
          },
        ],
      },
    ],
  },
]

export const makeRouter = () => createBrowserRouter(routes)

/** The same pages without a browser's address bar. */
export const makeMemoryRouter = (at: string) => createMemoryRouter(routes, { initialEntries: [at] })
