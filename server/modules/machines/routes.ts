import type { RouteSpec } from '../../http/route.ts'

export const machineRoutes: readonly RouteSpec[] = []
