import { render } from '@testing-library/react'
import { RouterProvider } from 'react-router'
import { Providers } from '../../src/app/providers.tsx'
import { makeMemoryRouter } from '../../src/app/router.tsx'
import { queryClient } from '../../src/lib/query-client.ts'

/** The whole client at an address. */
export function openApp(at: string) {
  const router = makeMemoryRouter(at)
  render(
    <Providers client={queryClient}>
      <RouterProvider router={router} />
    </Providers>,
  )
  return {
    /** path and query shown */
    here: () => router.state.location.pathname + router.state.location.search,
    goTo: (path: string) => router.navigate(path),
  }
}
