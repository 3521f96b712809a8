import { findsInList, findsOnPage } from '../../../shared/contract/search.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { searchAll } from './search-all.ts'

export const searchRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/search',
    summary: 'search what the person may read',
    access: 'signed-in',
    handle: async ({ em, person, held, query }) => ({ body: await searchAll(em, { person, held }, { text: query.q ?? '', most: query.all === 'yes' ? findsOnPage : findsInList }) }),
  }),
]
