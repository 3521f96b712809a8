import { randomUUID } from 'node:crypto'
import express, { Router, type Express, type RequestHandler } from 'express'
import helmet from 'helmet'
import type { Logger } from 'pino'
import { pinoHttp } from 'pino-http'
import { acceptBenchKeys } from './http/bench-key.ts'
import { errorHandler, notFound } from './http/error-handler.ts'
import { requestInLog } from './http/log.ts'
import { openApiRoute } from './http/openapi-route.ts'
import { mount, type RouteSpec } from './http/route.ts'
import { sameSite } from './http/same-site.ts'
import type { Services } from './http/services.ts'
import { useSessions } from './http/session.ts'
import { backupRoutes } from './modules/backups/routes.ts'
import { benchKeyRoutes } from './modules/bench-keys/routes.ts'
import { boardRoutes } from './modules/boards/routes.ts'
import { changeRoutes } from './modules/changes/routes.ts'
import { checkRoutes } from './modules/checks/routes.ts'
import { commentRoutes } from './modules/comments/routes.ts'
import { comparisonRoutes } from './modules/comparisons/routes.ts'
import { deskRoutes } from './modules/desk/routes.ts'
import { evidenceRoutes } from './modules/evidence/routes.ts'
import { firmwareRoutes } from './modules/firmware/routes.ts'
import { keyRoutes } from './modules/keys/routes.ts'
import { ledgerRoutes } from './modules/ledger/routes.ts'
import { machineRoutes } from './modules/machines/routes.ts'
import { mailRoutes } from './modules/mail/routes.ts'
import { peopleRoutes, publicPeopleRoutes } from './modules/people/routes.ts'
import { publicSecondFactorRoutes, secondFactorRoutes } from './modules/people/second-factor/routes.ts'
import { policyRoutes } from './modules/policy/routes.ts'
import { releaseRoutes } from './modules/releases/routes.ts'
import { reviewRoutes } from './modules/reviews/routes.ts'
import { searchRoutes } from './modules/search/routes.ts'

/** Every route of the API that a signed-in person reaches; tests walk it. */
export const routeTable: readonly RouteSpec[] = [
  ...peopleRoutes, ...secondFactorRoutes, ...machineRoutes, ...firmwareRoutes, ...policyRoutes, ...changeRoutes, ...checkRoutes, ...reviewRoutes, ...commentRoutes, ...evidenceRoutes, ...deskRoutes, ...releaseRoutes, ...boardRoutes, ...benchKeyRoutes, ...keyRoutes, ...comparisonRoutes, ...ledgerRoutes, ...searchRoutes, ...backupRoutes, ...mailRoutes,
  openApiRoute(() => routeTable),
]

const contentSecurity = (secure: boolean) =>
  helmet({
    useDefaults: false,
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'none'"],
        scriptSrc: ["'self'"],
        styleSrc: ["'self'", "'unsafe-inline'"],
        imgSrc: ["'self'", 'data:'],
        fontSrc: ["'self'"],
        connectSrc: ["'self'"],
        workerSrc: ["'self'"],
        formAction: ["'self'"],
        baseUri: ["'none'"],
        objectSrc: ["'none'"],
        frameAncestors: ["'none'"],
      },
    },
    strictTransportSecurity: secure ? { maxAge: 31_536_000, includeSubDomains: true } : false,
    referrerPolicy: { policy: 'same-origin' },
  } as Parameters<typeof helmet>[0])

export interface AppParts {
  services: Services
  log: Logger
  sessionSecret: string
  /** serves the client: built files in production, Vite's middleware in development; none in tests of the API */
  client?: RequestHandler
}

export function buildApp({ services, log, sessionSecret, client }: AppParts): Express {
  const app = express()
  app.disable('x-powered-by')
  if (services.config.secure) app.set('trust proxy', 1)
  app.use(pinoHttp({ logger: log, genReqId: () => randomUUID(), autoLogging: false, serializers: { req: requestInLog } }))
  app.use(contentSecurity(services.config.secure))
  const api = Router()
  api.use(express.json({ limit: '4mb', strict: true }))
  const passport = useSessions(app, services, sessionSecret)
  api.use(acceptBenchKeys(services))
  api.use(sameSite(() => services.config.baseUrl))
  publicPeopleRoutes(api, services, passport)
  publicSecondFactorRoutes(api, services)
  mount(api, services, routeTable)
  api.use(notFound)
  app.use('/api', api)
  if (client) app.use(client)
  app.use(notFound)
  app.use(errorHandler(log))
  return app
}
