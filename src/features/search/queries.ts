import { keepPreviousData, queryOptions } from '@tanstack/react-query'
import type { SearchAnswer } from '../../../shared/contract/search.ts'
import { get, withQuery } from '../../lib/api-client.ts'

/** What fits the words: a few of each kind for the list under the field, more for the page. The finds before stay while the next ones come. */
export const searchQuery = (text: string, { all = false }: { all?: boolean } = {}) =>
  queryOptions({
    queryKey: ['search', text, all],
    queryFn: ({ signal }) => get<SearchAnswer>(withQuery('/search', { q: text, all: all ? 'yes' : null }), { signal }),
    enabled: text !== '',
    placeholderData: keepPreviousData,
  })
