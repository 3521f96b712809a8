import { queryOptions } from '@tanstack/react-query'
import type { BenchKeys } from '../../../shared/contract/bench-keys.ts'
import { get } from '../../lib/api-client.ts'

export const benchKeysQuery = queryOptions({ queryKey: ['bench-keys'], queryFn: ({ signal }) => get<BenchKeys>('/account/bench-keys', { signal }) })
