import { route, type RouteSpec } from '../../http/route.ts'
import { presentDesk } from './present.ts'

export const deskRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/desk',
    summary: 'what waits for oneself',
    access: 'signed-in',
    handle: async ({ em, person, held, now, services }) => ({ body: await presentDesk(em, { person, held, now, rule: services.config.secondFactor }) }),
  }),
]
