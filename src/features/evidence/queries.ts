import { queryOptions } from '@tanstack/react-query'
import type { ComparisonView, EvidenceSummary, EvidenceView, IdentificationView, LogWindow } from '../../../shared/contract/evidence.ts'
import { get, withQuery } from '../../lib/api-client.ts'

/** While a log is being read, it is asked again this often, ms. */
const EVERY = 400

export const at = (machine: string, number: number | string) => `/machines/${encodeURIComponent(machine)}/evidence/${number}`

/** Logs of a joint as it stands. */
export const jointEvidenceQuery = (machine: string, joint: string) =>
  queryOptions({ queryKey: ['evidence', machine, 'joint', joint], queryFn: ({ signal }) => get<EvidenceSummary[]>(withQuery(`/machines/${encodeURIComponent(machine)}/evidence`, { joint }), { signal }) })

/** Logs that speak for a change. */
export const changeEvidenceQuery = (change: string, revision: number) =>
  queryOptions({ queryKey: ['evidence', 'of change', change, revision], queryFn: ({ signal }) => get<EvidenceSummary[]>(`/changes/${encodeURIComponent(change)}/evidence`, { signal }) })

export const evidenceQuery = (machine: string, number: string | number) =>
  queryOptions({
    queryKey: ['evidence', machine, 'log', Number(number)],
    queryFn: ({ signal }) => get<EvidenceView>(at(machine, number), { signal }),
    refetchInterval: ({ state }) => (state.data?.progress.state === 'running' ? EVERY : false),
  })

/** A log never alters once it is read. */
const forGood = { staleTime: Infinity, retry: false } as const

export const seriesQuery = (machine: string, number: number, stretch: { from: number | null; to: number | null }) =>
  queryOptions({ queryKey: ['evidence', machine, 'log', number, 'series', stretch], queryFn: ({ signal }) => get<LogWindow>(withQuery(`${at(machine, number)}/series`, { ...stretch, pieces: 700 }), { signal }), placeholderData: (before) => before, ...forGood })

/** `against`: a change's key, or "release"; empty for what the server takes by itself. */
export const comparisonQuery = (machine: string, number: number, { against, from }: { against: string; from: number | null }) =>
  queryOptions({ queryKey: ['evidence', machine, 'log', number, 'comparison', against, from], queryFn: ({ signal }) => get<ComparisonView>(withQuery(`${at(machine, number)}/comparison`, { change: against, from }), { signal }), staleTime: 5000, retry: false })

export const identificationQuery = (machine: string, number: number, { against, T_winding }: { against: string; T_winding: number }) =>
  queryOptions({ queryKey: ['evidence', machine, 'log', number, 'identification', against, T_winding], queryFn: ({ signal }) => get<IdentificationView>(withQuery(`${at(machine, number)}/identification`, { change: against, T_winding }), { signal }), staleTime: 5000, retry: false, placeholderData: (before) => before })
