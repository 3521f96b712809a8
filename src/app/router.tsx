import { createBrowserRouter, createMemoryRouter } from 'react-router'
import type { RouteObject } from 'react-router'
import { PageError, RootError } from './root-error.tsx'
import { SignedInLayout, signedInLoader } from './signed-in-layout.tsx'
import { FirstWait } from './first-wait.tsx'

/** Pages for those signed in; each is its own chunk, loaded when first opened. */
const pages: RouteObject[] = [
]

export const routes: RouteObject[] = [
  {
    ErrorBoundary: RootError,
    HydrateFallback: FirstWait,
    children: [
      { path: '/sign-in', lazy: () => import('../routes/sign-in.tsx') },
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
