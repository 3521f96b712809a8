import { QueryClient } from '@tanstack/react-query'
import { ApiProblem } from './api-client.ts'

const mayPass = (error: unknown) => error instanceof ApiProblem && (error.status === 0 || error.status >= 500)

/** Readings are kept ten seconds; only what may pass by itself is tried again. Acts are never repeated unasked. */
export const queryClient = new QueryClient({
  defaultOptions: {
    queries: { staleTime: 10_000, retry: (count, error) => count < 2 && mayPass(error) },
    mutations: { retry: false, networkMode: 'always' },
  },
})
