import { StrictMode } from 'react'
import { createRoot } from 'react-dom/client'
import { RouterProvider } from 'react-router/dom'
import '../index.css'
import { queryClient } from '../lib/query-client.ts'
import { Providers } from './providers.tsx'
import { makeRouter } from './router.tsx'
import { startTheme } from '../lib/theme.ts'

startTheme()
createRoot(document.getElementById('root')!).render(
  <StrictMode>
    <Providers client={queryClient}>
      <RouterProvider router={makeRouter()} />
    </Providers>
  </StrictMode>,
)
