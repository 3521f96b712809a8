import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { RotateKey, WorkplaceKeysView } from '../../../shared/contract/keys.ts'
import { act } from '../../lib/api-client.ts'
import { keysQuery } from './queries.ts'

export function useRotateKey() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: RotateKey) => act<WorkplaceKeysView>({ path: '/keys/rotate', body }),
    onSuccess: (view) => {
      client.setQueryData(keysQuery.queryKey, view)
      return client.invalidateQueries({ queryKey: ['ledger'] })
    },
  })
}
