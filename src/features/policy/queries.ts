import { queryOptions } from '@tanstack/react-query'
import type { MachinePolicyView } from '../../../shared/contract/policy.ts'
import { get } from '../../lib/api-client.ts'

export const policyQuery = (machine: string) => queryOptions({ queryKey: ['policy', machine], queryFn: ({ signal }) => get<MachinePolicyView>(`/machines/${encodeURIComponent(machine)}/policy`, { signal }) })
