import { useIsMutating, useMutation, useQueryClient } from '@tanstack/react-query'
import type { ChangeView } from '../../../shared/contract/changes.ts'
import type { Marked, ReadingView, ReturnChange, SignPeerReview, SignRelease } from '../../../shared/contract/reviews.ts'
import { act } from '../../lib/api-client.ts'
import { readingQuery } from './queries.ts'

type On = Pick<ChangeView, 'key' | 'revision'>
const at = (change: On) => `/changes/${encodeURIComponent(change.key)}`

/** Signs a peer review on the very content shown. `onSigned` takes up the answer; what it returns is waited for. */
export const useSignPeerReview = (change: On, onSigned: (view: ChangeView) => unknown) =>
  useMutation({ mutationFn: (body: SignPeerReview) => act<ChangeView>({ path: `${at(change)}/sign`, body, ifMatch: change.revision }), onSuccess: onSigned })

/** Signs the release and makes it. */
export const useSignRelease = (change: On, onReleased: (made: { machine: string; version: string }) => unknown) =>
  useMutation({ mutationFn: (body: SignRelease) => act<{ machine: string; version: string }>({ path: `${at(change)}/release`, body, ifMatch: change.revision }), onSuccess: onReleased })

export const useReturnChange = (change: On, onReturned: (view: ChangeView) => unknown) =>
  useMutation({ mutationFn: (body: ReturnChange) => act<ChangeView>({ path: `${at(change)}/return`, body, ifMatch: change.revision }), onSuccess: onReturned })

/** One stroke of reading: rows marked as read, or one taken back. */
export type Stroke = { read: readonly Marked[] } | { unread: string }

const marks = (view: ReadingView, stroke: Stroke): ReadingView => ({ ...view, read: 'read' in stroke ? [...new Set([...view.read, ...stroke.read.map((r) => r.key)])] : view.read.filter((k) => k !== stroke.unread) })

const scopeOf = (change: On) => `reading ${change.key}`

/** Whether marks are still on their way to the server. */
export const useMarksOnTheirWay = (change: On): boolean => useIsMutating({ predicate: (m) => m.options.scope?.id === scopeOf(change) }) > 0

/** Marks rows as read or unread: shown at once, taken back when the server refuses. Strokes are sent one after the other, so that the last one stands. */
export function useMarkRows(change: On) {
  const client = useQueryClient()
  const key = readingQuery(change.key, change.revision).queryKey
  return useMutation({
    scope: { id: scopeOf(change) },
    mutationFn: (stroke: Stroke) =>
      'read' in stroke
        ? act<ReadingView>({ path: `${at(change)}/reading`, body: { rows: stroke.read.map((r) => ({ key: r.key, hash: r.hash })) } })
        : act<ReadingView>({ method: 'DELETE', path: `${at(change)}/reading/${encodeURIComponent(stroke.unread)}` }),
    onMutate: async (stroke) => {
      await client.cancelQueries({ queryKey: key })
      const before = client.getQueryData(key)
      if (before) client.setQueryData(key, marks(before, stroke))
    },
    // The answer to one stroke does not know the next one, which is shown already: only the last of them is taken up.
    onSuccess: (view) => {
      if (client.isMutating({ predicate: (m) => m.options.scope?.id === scopeOf(change) }) === 1) client.setQueryData(key, view)
    },
    onError: () => client.invalidateQueries({ queryKey: key }),
  })
}
