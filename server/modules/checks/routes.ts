import type { RouteSpec } from '../../http/route.ts'

export const checkRoutes: readonly RouteSpec[] = []
