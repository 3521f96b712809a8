import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { ChangePassword, InvitePerson, LinkUsed, PersonView, RoleGrantRequest, SignIn, UseLink } from '../../../shared/contract/people.ts'
import { act, setActToken } from '../../lib/api-client.ts'
import { meQuery } from '../../lib/me.ts'

/** Signs in and reads who that is, so that the next page has its token. */
export function useSignIn() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: async (body: SignIn) => {
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

export const useAskReset = () => useMutation({ mutationFn: (email: string) => act({ path: '/reset', body: { email } }) })

/** Sets the password of a link's person; who else was signed in on this computer no longer is. */
export function useLink() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: UseLink) => act<LinkUsed>({ path: '/links/use', body }),
    onSuccess: () => {
      setActToken('')
      client.removeQueries({ queryKey: meQuery.queryKey })
    },
  })
}

export function useChangePassword() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: ChangePassword) => act<{ sessionsEnded: number }>({ path: '/account/password', body }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['sessions'] }),
  })
}

export function useEndSession() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (session: string) => act({ method: 'DELETE', path: `/account/sessions/${encodeURIComponent(session)}` }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['sessions'] }),
  })
}

/** People, what the reader may do themselves, and the traces that acts on people leave. */
function useStale() {
  const client = useQueryClient()
  return () => Promise.all([['people'], ['me'], ['ledger'], ['mail']].map((queryKey) => client.invalidateQueries({ queryKey })))
}

export function useInvite() {
  const stale = useStale()
  return useMutation({ mutationFn: (body: InvitePerson) => act<PersonView>({ path: '/people', body }), onSuccess: stale })
}

export function useGrantRole(person: number) {
  const stale = useStale()
  return useMutation({ mutationFn: (body: RoleGrantRequest) => act<PersonView>({ path: `/people/${person}/roles`, body }), onSuccess: stale })
}

export function useEndRole(person: number) {
  const stale = useStale()
  return useMutation({ mutationFn: (grant: number) => act<PersonView>({ method: 'DELETE', path: `/people/${person}/roles/${grant}` }), onSuccess: stale })
}

export type PersonAct = 'confirm-signing' | 'disable' | 'enable' | 'reset'

export function usePersonAct(person: number) {
  const stale = useStale()
  return useMutation({ mutationFn: (what: PersonAct) => act<PersonView>({ path: `/people/${person}/${what}`, body: {} }), onSuccess: stale })
}
