import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { DraftChange } from '../../../shared/contract/changes.ts'
import type { DescribeMachine, MachineView, MakeMachine } from '../../../shared/contract/machines.ts'
import { act } from '../../lib/api-client.ts'

const part = encodeURIComponent

/** The list, every page of a machine, and what is said of machines elsewhere. */
function useStale() {
  const client = useQueryClient()
  return () => Promise.all([client.invalidateQueries({ queryKey: ['machines'] }), client.invalidateQueries({ queryKey: ['ledger'] })])
}

export function useMakeMachine() {
  const stale = useStale()
  return useMutation({ mutationFn: (body: MakeMachine) => act<MachineView>({ path: '/machines', body }), onSuccess: stale })
}

export function useDescribeMachine(machine: string) {
  const stale = useStale()
  return useMutation({ mutationFn: (body: DescribeMachine) => act<MachineView>({ method: 'PATCH', path: `/machines/${part(machine)}`, body }), onSuccess: stale })
}

export function useRetireMachine(machine: string) {
  const stale = useStale()
  return useMutation({ mutationFn: (name: string) => act<MachineView>({ path: `/machines/${part(machine)}/retire`, body: { name } }), onSuccess: stale })
}

/** Begins a change on a machine, from its newest release. */
export function useDraftChange() {
  const client = useQueryClient()
  const stale = useStale()
  return useMutation({
    mutationFn: (body: DraftChange) => act<{ key: string }>({ path: '/changes', body }),
    onSuccess: () => Promise.all([stale(), client.invalidateQueries({ queryKey: ['changes'] })]),
  })
}
