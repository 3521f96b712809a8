import { queryOptions } from '@tanstack/react-query'
import type { CommentsView, NamedView } from '../../../shared/contract/comments.ts'
import { get } from '../../lib/api-client.ts'

export const commentsQuery = (change: string) =>
  queryOptions({ queryKey: ['comments', 'of', change], queryFn: ({ signal }) => get<CommentsView>(`/changes/${encodeURIComponent(change)}/comments`, { signal }) })

/** Open comments that name the reader. */
export const namingQuery = queryOptions({ queryKey: ['comments', 'naming me'], queryFn: ({ signal }) => get<NamedView[]>('/comments/naming-me', { signal }) })
