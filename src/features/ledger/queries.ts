import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query'
import type { CheckpointPage, LedgerPage, LedgerVerdict } from '../../../shared/contract/ledger.ts'
import { ApiProblem, get, withQuery } from '../../lib/api-client.ts'

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

/** One entry by its number in the chain; '' asks for none. */
export const entryQuery = (sequence: string) =>
  queryOptions({
    queryKey: ['ledger', 'entry', sequence],
    queryFn: async ({ signal }) => {
      const { entries } = await get<LedgerPage>(withQuery('/ledger', { before: Number(sequence) + 1 }), { signal })
      const found = entries.find((e) => String(e.sequence) === sequence)
      if (!found) throw new ApiProblem({ code: 'not-found', status: 404, title: 'Not found', detail: `There is no entry ${sequence} that you may read. The ledger below is complete as far as you may read it.` })
      return found
    },
    enabled: /^[1-9]\d{0,9}$/.test(sequence),
    staleTime: Infinity,
  })

/** The walk along the whole chain; asked for, not read by itself. */
export const verdictQuery = queryOptions({ queryKey: ['ledger', 'verdict'], queryFn: ({ signal }) => get<LedgerVerdict>('/ledger/verify', { signal }), staleTime: Infinity })

/** The newest signed ends of the ledger. */
export const checkpointsQuery = queryOptions({ queryKey: ['ledger', 'checkpoints'], queryFn: ({ signal }) => get<CheckpointPage>('/ledger/checkpoints', { signal }) })
