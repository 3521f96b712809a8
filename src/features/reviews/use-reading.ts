import { useQuery } from '@tanstack/react-query'
import { useMemo } from 'react'
import type { ChangeView } from '../../../shared/contract/changes.ts'
import type { DiffView, Marked } from '../../../shared/contract/reviews.ts'
import { useMarkRows, useMarksOnTheirWay } from './mutations.ts'
import { readingQuery } from './queries.ts'
import { rowsOf } from './rows-of.ts'

/** How far the reader is with the rows of a change, and the ways to mark them. */
export function useReading(change: ChangeView, diff: DiffView | undefined) {
  const query = useQuery(readingQuery(change.key, change.revision))
  const strokes = useMarkRows(change)
  const onTheirWay = useMarksOnTheirWay(change)
  const view = query.data
  const marks = view?.may.mark.allowed ?? false
  const read = useMemo(() => new Set(view?.read), [view])
  const rows = useMemo(() => (diff ? rowsOf(diff) : []), [diff])
  const unread = marks ? rows.filter((r) => !read.has(r.key)) : []
  return {
    view,
    rows,
    /** null for whoever keeps no marks */
    read: marks ? read : null,
    unread,
    /** false while marks are on their way to the server */
    kept: !onTheirWay,
    problem: strokes.error,
    mark: (marked: readonly Marked[]) => {
      const fresh = marked.filter((r) => !read.has(r.key))
      if (fresh.length > 0) strokes.mutate({ read: fresh })
    },
    unmark: (key: string) => strokes.mutate({ unread: key }),
  }
}

export type Reading = ReturnType<typeof useReading>
