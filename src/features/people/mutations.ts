import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { ChangePassword, InvitePerson, LinkUsed, PersonView, RoleGrantRequest, SignIn, UseLink } from '../../../shared/contract/people.ts'
import type { ReenterBoth, RecoveryCodes, SecondFactorBegun, SignInAnswer } from '../../../shared/contract/second-factor.ts'
import { act, setActToken } from '../../lib/api-client.ts'
import { meQuery } from '../../lib/me.ts'

/** Signs in and reads who that is, so that the next page has its token; null when a code is asked for first. */
export function useSignIn() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: async (body: SignIn) => {
      const { signedIn } = await act<SignInAnswer>({ path: '/session', body })
      return signedIn ? client.fetchQuery({ ...meQuery, staleTime: 0 }) : null
    },
  })
}

/** The second step of signing in. */
export function useEnterSignInCode() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: async (code: string) => {
      await act<SignInAnswer>({ path: '/session/code', body: { code } })
      return client.fetchQuery({ ...meQuery, staleTime: 0 })
    },
  })
}

/** Lets this session sign for some minutes, where the workplace asks for a code before each signature. */
export const useEnterCode = () => useMutation({ mutationFn: (code: string) => act<{ until: string }>({ path: '/account/code', body: { code } }) })

export const useBeginSecondFactor = () => useMutation({ mutationFn: (password: string) => act<SecondFactorBegun>({ path: '/account/second-factor', body: { password } }) })

/** What an act on the own second factor alters: it, the sessions, and the traces. */
function useOwnStale() {
  const client = useQueryClient()
  return () => Promise.all([['me'], ['sessions'], ['ledger'], ['mail']].map((queryKey) => client.invalidateQueries({ queryKey })))
}

export function useConfirmSecondFactor() {
  const stale = useOwnStale()
  return useMutation({ mutationFn: (code: string) => act<RecoveryCodes>({ path: '/account/second-factor/confirm', body: { code } }), onSuccess: stale })
}

export function useRemoveSecondFactor() {
  const stale = useOwnStale()
  return useMutation({ mutationFn: (body: ReenterBoth) => act<{ removed: true }>({ path: '/account/second-factor/remove', body }), onSuccess: stale })
}

export function useMakeRecoveryCodes() {
  const stale = useOwnStale()
  return useMutation({ mutationFn: (body: ReenterBoth) => act<RecoveryCodes>({ path: '/account/recovery-codes', body }), onSuccess: stale })
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

export type PersonAct = 'confirm-signing' | 'disable' | 'enable' | 'reset' | 'second-factor/reset'

export function usePersonAct(person: number) {
  const stale = useStale()
  return useMutation({ mutationFn: (what: PersonAct) => act<PersonView>({ path: `/people/${person}/${what}`, body: {} }), onSuccess: stale })
}
