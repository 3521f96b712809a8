import type { RouteSpec } from '../../http/route.ts'

export const releaseRoutes: readonly RouteSpec[] = []
