import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { SignIn } from '../../../shared/contract/people.ts'
import { act, setActToken } from '../../lib/api-client.ts'
import { meQuery } from '../../lib/me.ts'

/** Signs in and reads who that is, so that the next page has its token. */
export function useSignIn() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: async (body: SignIn) => {
      setActToken('')
      await act({ path: '/session', body })
      return client.fetchQuery({ ...meQuery, staleTime: 0 })
    },
  })
}

/** Ends the session; the page is loaded anew, so that nothing read before stays in it. */
export function useSignOut() {
  return useMutation({
    mutationFn: () => act({ method: 'DELETE', path: '/session' }),
    onSuccess: () => window.location.assign('/sign-in'),
  })
}
