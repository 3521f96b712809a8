import { useEffect } from 'react'
import { useQueryClient, type Query, type QueryClient } from '@tanstack/react-query'
import type { CheckEvent, Progress } from '../../../shared/contract/checks.ts'
import { listenInView } from '../../lib/listen-in-view.ts'
import { isStreamed, setStreamed } from './streamed.ts'

/** A stream that the server closed for good is opened again after this, ms. */
const TRY_AGAIN = 10_000

/** What an answer that is not whole yet holds. */
type Partly = { progress: Progress; complete?: boolean; hash?: string; cells?: unknown; proposal?: unknown }

/** Whether a cached answer waits for what an event tells of. */
function waitsFor(event: CheckEvent, { queryKey, state }: Query): boolean {
  const data = state.data as Partly | undefined
  if (data?.progress === undefined) return false
  if (event.kind === 'check') return data.complete === false
  return queryKey[3] === event.kind && data.hash === event.hash && !data.cells && !data.proposal
}

/** Puts an event's progress into the answers that wait for it; they are read anew where it brings more than progress. */
function take(client: QueryClient, change: string, event: CheckEvent, more: boolean): void {
  for (const query of client.getQueryCache().findAll({ queryKey: ['checks', change] })) {
    if (!waitsFor(event, query)) continue
    client.setQueryData<Partly>(query.queryKey, (before) => before && { ...before, progress: event.progress })
    if (more) void client.invalidateQueries({ queryKey: query.queryKey, exact: true })
  }
}

/** Opens a change's stream while the page is in view; returns the way to close it. */
function openStream(client: QueryClient, change: string): () => void {
  let finished = -1
  return listenInView(`/api/changes/${encodeURIComponent(change)}/check/events`, {
    tryAgain: TRY_AGAIN,
    onOpen: () => setStreamed(change, true),
    onData: (data) => {
      const event = JSON.parse(data) as CheckEvent
      const more = event.progress.state !== 'running' || (event.kind === 'check' && finished >= 0 && event.finished !== finished)
      if (event.kind === 'check') finished = event.finished
      take(client, change, event, more)
    },
    onBroken: () => {
      if (!isStreamed(change)) return
      setStreamed(change, false)
      // Answers that wait are read anew, and from then on at intervals, until the stream is back.
      void client.invalidateQueries({ queryKey: ['checks', change], predicate: ({ state }) => (state.data as Partly | undefined)?.progress?.state === 'running' })
    },
    onClosed: () => setStreamed(change, false),
  })
}

const held = new Map<string, { users: number; close: () => void }>()

/**
 * Hears of the progress of a change's check, map and retune while one of them goes on; one stream for everything that shows them.
 *
 * Where there is no stream the queries read their answers anew at intervals.
 */
export function useCheckStream(change: string, goesOn: boolean): void {
  const client = useQueryClient()
  useEffect(() => {
    // Old browsers and tests of other pages know no such streams.
    if (!goesOn || typeof EventSource === 'undefined') return
    const stream = held.get(change) ?? { users: 0, close: openStream(client, change) }
    stream.users += 1
    held.set(change, stream)
    return () => {
      stream.users -= 1
      if (stream.users > 0) return
      held.delete(change)
      stream.close()
    }
  }, [change, goesOn, client])
}
