import { queryOptions } from '@tanstack/react-query'
import type { AskMap, AskStretches, CheckView, JointReportView, MapView, Progress, QuickView, StretchesView } from '../../../shared/contract/checks.ts'
import type { AskRetune, RetuneView } from '../../../shared/contract/proposals.ts'
import type { Edit } from '../../../shared/parameters/edits.ts'
import { act, get } from '../../lib/api-client.ts'
import { isStreamed } from './streamed.ts'

/** While work goes on in the background and no stream tells of it, its answer is read again this often, ms. */
const EVERY = 800

const at = (change: string) => `/changes/${encodeURIComponent(change)}/check`
const goesOn = (change: string, progress: Progress | undefined) => (progress?.state === 'running' && !isStreamed(change) ? EVERY : false)
const whileRunning = (change: string) => ({ state }: { state: { data?: Pick<CheckView, 'complete' | 'progress'> } }) => (state.data && !state.data.complete ? goesOn(change, state.data.progress) : false)

/** The check of a change as saved at a revision: nominal findings at once, those over the tolerances as they come. While a newer one runs, the one before is shown, marked stale. */
export const checkQuery = (change: string, revision: number) =>
  queryOptions({
    queryKey: ['checks', change, revision],
    queryFn: ({ signal }) => get<CheckView>(at(change), { signal }),
    placeholderData: (before, query) => (query?.queryKey[1] === change ? before : undefined),
    refetchInterval: whileRunning(change),
  })

/** The check of a change as it stands, for lists: its revision is not known there. */
export const checkNowQuery = (change: string) =>
  queryOptions({
    queryKey: ['checks', change, 'now'],
    queryFn: ({ signal }) => get<CheckView>(at(change), { signal }),
    staleTime: 60_000,
    refetchInterval: whileRunning(change),
  })

/** Curves, histories and corners of one joint, `of` a revision or the hash of what was checked. The one of the revision before stays until the next is there, never that of another joint. */
export const jointReportQuery = (change: string, of: number | string, joint: string) =>
  queryOptions({
    queryKey: ['checks', change, of, 'joint', joint],
    queryFn: ({ signal }) => get<JointReportView>(`${at(change)}/joints/${encodeURIComponent(joint)}`, { signal }),
    placeholderData: (before) => (before?.joint === joint ? before : undefined),
    refetchInterval: whileRunning(change),
  })

/** A stability map; the same question again answers it as far as it is. */
export const mapQuery = (change: string, revision: number, asked: AskMap) =>
  queryOptions({
    queryKey: ['checks', change, revision, 'map', asked],
    queryFn: () => act<MapView>({ path: `${at(change)}/map`, body: asked }),
    staleTime: Infinity,
    retry: false,
    refetchInterval: ({ state }) => (state.data && !state.data.cells ? goesOn(change, state.data.progress) : false),
  })

/** A search for gains with a larger worst margin, as far as it is. */
export const retuneQuery = (change: string, revision: number, asked: AskRetune) =>
  queryOptions({
    queryKey: ['checks', change, revision, 'retune', asked],
    queryFn: () => act<RetuneView>({ path: `${at(change)}/retune`, body: asked }),
    staleTime: Infinity,
    retry: false,
    refetchInterval: ({ state }) => (state.data && !state.data.proposal ? goesOn(change, state.data.progress) : false),
  })

/** Answers about values that were typed over are of no use for long, ms. */
const TYPED_OVER = 30_000

/**
 * One joint as edits not saved yet would have it.
 *
 * @param as  what the joint's figures follow from, as text: the same once the edits are saved, so that the answer holds until the whole check is there
 */
export const quickQuery = ({ change, joint, as, edits }: { change: string; joint: string; as: string; edits: readonly Edit[] }) =>
  queryOptions({
    queryKey: ['checks', change, 'quick', joint, as],
    queryFn: ({ signal }) => act<QuickView>({ path: `${at(change)}/quick`, body: { joint, edits }, signal }),
    staleTime: Infinity,
    gcTime: TYPED_OVER,
    retry: false,
    placeholderData: (before) => (before?.joint.joint === joint ? before : undefined),
  })

/** Where along the rulers given a joint would not be stable, all else as saved at the revision. Those of the revision before stay until the next are there. */
export const stretchesQuery = (change: string, revision: number, asked: AskStretches) =>
  queryOptions({
    queryKey: ['checks', change, revision, 'stretches', asked],
    queryFn: ({ signal }) => act<StretchesView>({ path: `${at(change)}/stretches`, body: asked, signal }),
    staleTime: Infinity,
    gcTime: TYPED_OVER,
    retry: false,
    placeholderData: (before) => (before?.joint === asked.joint ? before : undefined),
  })
