import { queryOptions } from '@tanstack/react-query'
import type { CheckView } from '../../../shared/contract/checks.ts'
import { get } from '../../lib/api-client.ts'

/** The check of a change as saved at a revision; while a newer one runs, the one before is shown, marked stale. */
export const checkQuery = (change: string, revision: number) =>
  queryOptions({
    queryKey: ['checks', change, revision],
    queryFn: ({ signal }) => get<CheckView>(`/changes/${encodeURIComponent(change)}/check`, { signal }),
    placeholderData: (before, query) => (query?.queryKey[1] === change ? before : undefined),
  })

/** The check of a change as it stands, for lists: its revision is not known there. */
export const checkNowQuery = (change: string) =>
  queryOptions({
    queryKey: ['checks', change, 'now'],
    queryFn: ({ signal }) => get<CheckView>(`/changes/${encodeURIComponent(change)}/check`, { signal }),
    staleTime: 60_000,
  })
