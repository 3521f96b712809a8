import { queryOptions } from '@tanstack/react-query'
import type { CompareChoices, ComparisonView } from '../../../shared/contract/comparisons.ts'
import { get, withQuery } from '../../lib/api-client.ts'

export const choicesQuery = (machine: string) => queryOptions({ queryKey: ['compare', 'choices', machine], queryFn: ({ signal }) => get<CompareChoices>(`/machines/${encodeURIComponent(machine)}/compare-choices`, { signal }) })

/** Two sides against each other; a draft moves, so nothing is kept for long. */
export const comparisonQuery = (a: string, b: string) => queryOptions({ queryKey: ['compare', 'sides', a, b], queryFn: ({ signal }) => get<ComparisonView>(withQuery('/compare', { a, b }), { signal }), retry: false })
