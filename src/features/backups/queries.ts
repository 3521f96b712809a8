import { queryOptions } from '@tanstack/react-query'
import type { BackupsPage } from '../../../shared/contract/backups.ts'
import { get } from '../../lib/api-client.ts'

export const backupsQuery = queryOptions({ queryKey: ['backups'], queryFn: ({ signal }) => get<BackupsPage>('/backups', { signal }) })
