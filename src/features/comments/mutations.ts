import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { CommentsView, CommentWritten, WriteComment } from '../../../shared/contract/comments.ts'
import { act } from '../../lib/api-client.ts'
import { commentsQuery, namingQuery } from './queries.ts'

const at = (change: string) => `/changes/${encodeURIComponent(change)}/comments`

function useTakeUp(change: string) {
  const client = useQueryClient()
  return (view: CommentsView) => {
    client.setQueryData(commentsQuery(change).queryKey, view)
    return client.invalidateQueries({ queryKey: namingQuery.queryKey })
  }
}

export function useWriteComment(change: string) {
  const takeUp = useTakeUp(change)
  return useMutation({ mutationFn: (body: WriteComment) => act<CommentWritten>({ path: at(change), body }), onSuccess: takeUp })
}

export function useMarkAnswered(change: string) {
  const takeUp = useTakeUp(change)
  return useMutation({ mutationFn: (comment: number) => act<CommentsView>({ path: `${at(change)}/${comment}/answered` }), onSuccess: takeUp })
}
