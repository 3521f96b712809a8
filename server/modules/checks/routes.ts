import type { CheckView } from '../../../shared/contract/checks.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { onChange } from '../changes/locate.ts'
import { checkChange } from './check-change.ts'

export const checkRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/changes/:change/check',
    summary: 'read the check of a change',
    access: 'read',
    place: onChange,
    handle: async ({ services, em, place }) => {
      const { result, checkedAt } = await checkChange(services, em, place.change)
      return { body: { ...result, checkedAt: checkedAt.toISOString(), complete: true, progress: { done: 1, total: 1, state: 'done', problem: '' } } satisfies CheckView }
    },
  }),
]
