import type { RouteSpec } from '../../http/route.ts'

export const firmwareRoutes: readonly RouteSpec[] = []
