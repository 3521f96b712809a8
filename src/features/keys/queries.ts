import { queryOptions } from '@tanstack/react-query'
import type { WorkplaceKeysView } from '../../../shared/contract/keys.ts'
import { get } from '../../lib/api-client.ts'

export const keysQuery = queryOptions({ queryKey: ['keys'], queryFn: ({ signal }) => get<WorkplaceKeysView>('/keys', { signal }) })
