import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { MachinePolicyView, ProposePolicy } from '../../../shared/contract/policy.ts'
import { act } from '../../lib/api-client.ts'

const at = (machine: string, number?: number) => `/machines/${encodeURIComponent(machine)}/policy${number === undefined ? '' : `/${number}`}`

/** The policy, and what is checked by it. */
function useStale(machine: string) {
  const client = useQueryClient()
  return () => Promise.all([['policy', machine], ['machines', machine], ['changes'], ['ledger']].map((queryKey) => client.invalidateQueries({ queryKey })))
}

export function useProposePolicy(machine: string) {
  const stale = useStale(machine)
  return useMutation({ mutationFn: (body: ProposePolicy) => act<MachinePolicyView>({ path: at(machine), body }), onSuccess: stale })
}

export function useSignPolicy(machine: string, number: number) {
  const stale = useStale(machine)
  return useMutation({ mutationFn: (password: string) => act<MachinePolicyView>({ path: `${at(machine, number)}/sign`, body: { password } }), onSuccess: stale })
}

export function useDeclinePolicy(machine: string, number: number) {
  const stale = useStale(machine)
  return useMutation({ mutationFn: (reason: string) => act<MachinePolicyView>({ path: `${at(machine, number)}/decline`, body: { reason } }), onSuccess: stale })
}
