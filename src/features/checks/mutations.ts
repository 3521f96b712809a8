import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { StoppedView } from '../../../shared/contract/checks.ts'
import type { AskStartingValues, StartingValuesView } from '../../../shared/contract/proposals.ts'
import { act } from '../../lib/api-client.ts'

const at = (change: string) => `/changes/${encodeURIComponent(change)}/check`

/** Stops the walk over the tolerances of a change's check, or goes on with it; what is done is kept. */
function useWalk(change: string, what: 'stop' | 'resume') {
  const client = useQueryClient()
  return useMutation({
    mutationFn: () => act<StoppedView>({ path: `${at(change)}/${what}` }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['checks', change] }),
  })
}

export const useStopCheck = (change: string) => useWalk(change, 'stop')
export const useResumeCheck = (change: string) => useWalk(change, 'resume')

/** Gains to start from, by published rules. Nothing is applied. */
export const useStartingValues = (change: string) => useMutation({ mutationFn: (body: AskStartingValues) => act<StartingValuesView>({ path: `${at(change)}/starting-values`, body }) })
