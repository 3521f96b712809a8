import { queryOptions } from '@tanstack/react-query'
import type { CheckView } from '../../../shared/contract/checks.ts'
import { get } from '../../lib/api-client.ts'

/** While the tolerances are walked in the background, the check is read again this often, ms. */
const EVERY = 800

const whileRunning = ({ state }: { state: { data?: CheckView } }) => (state.data && !state.data.complete && state.data.progress.state === 'running' ? EVERY : false)

/** The check of a change as saved at a revision: nominal findings at once, those over the tolerances as they come. While a newer one runs, the one before is shown, marked stale. */
export const checkQuery = (change: string, revision: number) =>
  queryOptions({
    queryKey: ['checks', change, revision],
    queryFn: ({ signal }) => get<CheckView>(`/changes/${encodeURIComponent(change)}/check`, { signal }),
    placeholderData: (before, query) => (query?.queryKey[1] === change ? before : undefined),
    refetchInterval: whileRunning,
  })

/** The check of a change as it stands, for lists: its revision is not known there. */
export const checkNowQuery = (change: string) =>
  queryOptions({
    queryKey: ['checks', change, 'now'],
    queryFn: ({ signal }) => get<CheckView>(`/changes/${encodeURIComponent(change)}/check`, { signal }),
    staleTime: 60_000,
    refetchInterval: whileRunning,
  })
