import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query'
import type { CheckpointPage, LedgerPage, LedgerVerdict } from '../../../shared/contract/ledger.ts'
import { get, withQuery } from '../../lib/api-client.ts'

export interface LedgerFilter {
  act: string
  machine: string
  person: string
}

/** The ledger, newest first, page by page. */
export const ledgerQuery = (filter: LedgerFilter) =>
  infiniteQueryOptions({
    queryKey: ['ledger', 'entries', filter],
    queryFn: ({ pageParam, signal }) => get<LedgerPage>(withQuery('/ledger', { ...filter, before: pageParam }), { signal }),
    initialPageParam: null as number | null,
    getNextPageParam: (page) => page.next,
  })

/** The walk along the whole chain; asked for, not read by itself. */
export const verdictQuery = queryOptions({ queryKey: ['ledger', 'verdict'], queryFn: ({ signal }) => get<LedgerVerdict>('/ledger/verify', { signal }), staleTime: Infinity })

/** The newest signed ends of the ledger. */
export const checkpointsQuery = queryOptions({ queryKey: ['ledger', 'checkpoints'], queryFn: ({ signal }) => get<CheckpointPage>('/ledger/checkpoints', { signal }) })
