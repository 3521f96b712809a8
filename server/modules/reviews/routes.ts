import type { RouteSpec } from '../../http/route.ts'

export const reviewRoutes: readonly RouteSpec[] = []
