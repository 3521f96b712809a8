import type { RouteSpec } from '../../http/route.ts'

export const mailRoutes: readonly RouteSpec[] = []
