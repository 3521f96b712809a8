import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { StoppedView } from '../../../shared/contract/checks.ts'
import { act } from '../../lib/api-client.ts'

/** Stops the walk over the tolerances of a change's check, or goes on with it; what is done is kept. */
function useWalk(change: string, what: 'stop' | 'resume') {
  const client = useQueryClient()
  return useMutation({
    mutationFn: () => act<StoppedView>({ path: `/changes/${encodeURIComponent(change)}/check/${what}` }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['checks', change] }),
  })
}

export const useStopCheck = (change: string) => useWalk(change, 'stop')
export const useResumeCheck = (change: string) => useWalk(change, 'resume')
