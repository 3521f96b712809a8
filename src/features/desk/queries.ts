import { queryOptions } from '@tanstack/react-query'
import type { DeskView } from '../../../shared/contract/desk.ts'
import { get } from '../../lib/api-client.ts'

/** What waits for oneself besides changes and boards. */
export const deskQuery = queryOptions({ queryKey: ['desk'], queryFn: ({ signal }) => get<DeskView>('/desk', { signal }) })
