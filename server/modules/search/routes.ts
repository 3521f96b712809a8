import { findsInList, findsOnPage } from '../../../shared/contract/search.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { searchAll } from './search-all.ts'

export const searchRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/search',
    query: { q: { description: 'words, a number, an address such as 0x33, or the beginning of a hash', example: 'knee' }, all: { description: 'yes: up to fifty of each kind' } },
    summary: 'search what the person may read',
    access: 'signed-in',
    handle: async ({ em, person, held, query }) => ({ body: await searchAll(em, { person, held }, { text: query.q ?? '', most: query.all === 'yes' ? findsOnPage : findsInList }) }),
  }),
]
