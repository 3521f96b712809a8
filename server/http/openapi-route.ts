import { openApiDocument } from './openapi.ts'
import { route, type RouteSpec } from './route.ts'

/** The route that tells of all routes, itself included. */
export const openApiRoute = (table: () => readonly RouteSpec[]): RouteSpec =>
  route({
    method: 'get',
    path: '/openapi.json',
    summary: 'read this document',
    access: 'signed-in',
    handle: async ({ services }) => ({ body: openApiDocument(table(), { baseUrl: services.config.baseUrl }) }),
  })
