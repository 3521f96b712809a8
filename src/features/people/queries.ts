import { queryOptions } from '@tanstack/react-query'
import type { PersonView, SessionView, WorkplaceView } from '../../../shared/contract/people.ts'
import { get } from '../../lib/api-client.ts'

/** What the sign-in page may know; the same for as long as the program runs. */
export const workplaceQuery = queryOptions({ queryKey: ['workplace'], queryFn: ({ signal }) => get<WorkplaceView>('/workplace', { signal }), staleTime: Infinity })

export const peopleQuery = queryOptions({ queryKey: ['people'], queryFn: ({ signal }) => get<PersonView[]>('/people', { signal }) })

export const personQuery = (id: number) => queryOptions({ queryKey: ['people', id], queryFn: ({ signal }) => get<PersonView>(`/people/${id}`, { signal }) })

export const sessionsQuery = queryOptions({ queryKey: ['sessions'], queryFn: ({ signal }) => get<SessionView[]>('/me/sessions', { signal }) })
