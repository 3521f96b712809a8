import type { RouteSpec } from '../../http/route.ts'

export const changeRoutes: readonly RouteSpec[] = []
