import { queryOptions } from '@tanstack/react-query'
import type { LinkView, PeopleView, PersonView, SessionView, WorkplaceView } from '../../../shared/contract/people.ts'
import { get } from '../../lib/api-client.ts'

/** What the sign-in page may know; the same for as long as the program runs. */
export const workplaceQuery = queryOptions({ queryKey: ['workplace'], queryFn: ({ signal }) => get<WorkplaceView>('/workplace', { signal }), staleTime: Infinity })

export const peopleQuery = queryOptions({ queryKey: ['people'], queryFn: ({ signal }) => get<PeopleView>('/people', { signal }) })

export const personQuery = (id: string) => queryOptions({ queryKey: ['people', id], queryFn: ({ signal }) => get<PersonView>(`/people/${encodeURIComponent(id)}`, { signal }) })

export const sessionsQuery = queryOptions({ queryKey: ['sessions'], queryFn: async ({ signal }) => (await get<{ sessions: SessionView[] }>('/account/sessions', { signal })).sessions })

/** Whom a single-use link is for. Looked at once; using it makes it stale for good. */
export const linkQuery = (secret: string) =>
  queryOptions({ queryKey: ['links', secret], queryFn: ({ signal }) => get<LinkView>(`/links/${encodeURIComponent(secret)}`, { signal }), staleTime: Infinity, retry: false })
