import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { CheckpointPage, CheckpointsVerdict } from '../../../shared/contract/ledger.ts'
import { act } from '../../lib/api-client.ts'
import { checkpointsQuery } from './queries.ts'

export function useSignCheckpoint() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: () => act<CheckpointPage>({ path: '/ledger/checkpoints', body: {} }),
    onSuccess: (page) => {
      client.setQueryData(checkpointsQuery.queryKey, page)
      return client.invalidateQueries({ queryKey: ['ledger', 'entries'] })
    },
  })
}

/** Holds a file of checkpoints, kept elsewhere, against the ledger; alters nothing. */
export const useHoldCheckpoints = () => useMutation({ mutationFn: async (file: File) => act<CheckpointsVerdict>({ path: '/ledger/checkpoints/verify', body: { checkpoints: await file.text() } }) })
