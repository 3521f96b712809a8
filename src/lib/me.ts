import { queryOptions, useSuspenseQuery } from '@tanstack/react-query'
import type { Me } from '../../shared/contract/people.ts'
import { get, setActToken } from './api-client.ts'

/** Who is signed in; reading it also takes up the token that acts carry. */
export const meQuery = queryOptions({
  queryKey: ['me'],
  queryFn: async ({ signal }) => {
    const me = await get<Me>('/me', { signal })
    setActToken(me.token)
    return me
  },
  staleTime: 60_000,
})

/** The person signed in, inside the signed-in layout. */
export const useMe = (): Me => useSuspenseQuery(meQuery).data

/** Whether an act of the matrix is held: on the machine, on all of them, or (machine null) wherever. To hide by only; the server decides. */
export const holds = (me: Me, act: string, machine: string | null = null): boolean =>
  (me.acts['*'] ?? []).includes(act) || (machine === null ? false : (me.acts[machine] ?? []).includes(act))
