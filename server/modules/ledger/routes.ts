import type { RouteSpec } from '../../http/route.ts'

export const ledgerRoutes: readonly RouteSpec[] = []
