import { queryOptions } from '@tanstack/react-query'
import type { VersionProposal } from '../../../shared/contract/releases.ts'
import type { DiffView } from '../../../shared/contract/reviews.ts'
import { get } from '../../lib/api-client.ts'

const at = (change: string) => `/changes/${encodeURIComponent(change)}`

/** What a change alters, as saved at a revision. */
export const diffQuery = (change: string, revision: number) =>
  queryOptions({ queryKey: ['reviews', 'diff', change, revision], queryFn: ({ signal }) => get<DiffView>(`${at(change)}/diff`, { signal }), placeholderData: (before) => before })

/** The version that Detent proposes for a change, as saved at a revision. */
export const versionQuery = (change: string, revision: number) =>
  queryOptions({ queryKey: ['reviews', 'version', change, revision], queryFn: ({ signal }) => get<VersionProposal>(`${at(change)}/version`, { signal }), placeholderData: (before) => before })
