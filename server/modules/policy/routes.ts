import type { RouteSpec } from '../../http/route.ts'

export const policyRoutes: readonly RouteSpec[] = []
