import { queryOptions } from '@tanstack/react-query'
import type { VersionProposal } from '../../../shared/contract/releases.ts'
import type { DiffView, EffectsView, ReadingView } from '../../../shared/contract/reviews.ts'
import { get } from '../../lib/api-client.ts'

const at = (change: string) => `/changes/${encodeURIComponent(change)}`

/** What a change alters, as saved at a revision. */
export const diffQuery = (change: string, revision: number) =>
  queryOptions({ queryKey: ['reviews', 'diff', change, revision], queryFn: ({ signal }) => get<DiffView>(`${at(change)}/diff`, { signal }), placeholderData: (before) => before })

/** The version that Detent proposes for a change, as saved at a revision. */
export const versionQuery = (change: string, revision: number) =>
  queryOptions({ queryKey: ['reviews', 'version', change, revision], queryFn: ({ signal }) => get<VersionProposal>(`${at(change)}/version`, { signal }), placeholderData: (before) => before })

/** How far the reader and the others are with the rows of a change, as saved at a revision. */
export const readingQuery = (change: string, revision: number) =>
  queryOptions({ queryKey: ['reviews', 'reading', change, revision], queryFn: ({ signal }) => get<ReadingView>(`${at(change)}/reading`, { signal }), placeholderData: (before) => before })

/** While effects are being computed they are asked for again this often, ms. */
const LOOK_AGAIN = 900

/** What each altered value does alone; asked again until all of it is computed. */
export const effectsQuery = (change: string, revision: number) =>
  queryOptions({
    queryKey: ['reviews', 'effects', change, revision],
    queryFn: ({ signal }) => get<EffectsView>(`${at(change)}/effects`, { signal }),
    placeholderData: (before) => before,
    refetchInterval: ({ state }) => (state.data?.progress.state === 'running' ? LOOK_AGAIN : false),
  })
