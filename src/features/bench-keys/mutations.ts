import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { BenchKeys, MadeBenchKey, MakeBenchKey } from '../../../shared/contract/bench-keys.ts'
import { act } from '../../lib/api-client.ts'
import { benchKeysQuery } from './queries.ts'

function useStale() {
  const client = useQueryClient()
  return () => Promise.all([client.invalidateQueries({ queryKey: benchKeysQuery.queryKey }), client.invalidateQueries({ queryKey: ['ledger'] })])
}

export function useMakeBenchKey() {
  const stale = useStale()
  return useMutation({ mutationFn: (body: MakeBenchKey) => act<MadeBenchKey>({ path: '/account/bench-keys', body }), onSuccess: stale, gcTime: 0 })
}

export function useRevokeBenchKey() {
  const stale = useStale()
  return useMutation({ mutationFn: (id: number) => act<BenchKeys>({ method: 'DELETE', path: `/account/bench-keys/${id}` }), onSuccess: stale })
}
