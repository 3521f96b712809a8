import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { BackupsPage } from '../../../shared/contract/backups.ts'
import { act } from '../../lib/api-client.ts'
import { backupsQuery } from './queries.ts'

export function useMakeBackup() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: () => act<BackupsPage>({ path: '/backups', body: {} }),
    onSuccess: (page) => {
      client.setQueryData(backupsQuery.queryKey, page)
      return client.invalidateQueries({ queryKey: ['ledger'] })
    },
  })
}
