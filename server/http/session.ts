import { randomBytes } from 'node:crypto'
import type { Express, Request } from 'express'
import session from 'express-session'
import { Passport } from 'passport'
import { Strategy } from 'passport-local'
import { checkCredentials } from '../modules/people/check-credentials.ts'
import { Person } from '../modules/people/person.entity.ts'
import type { Services } from './services.ts'
import { DatabaseSessionStore, idleMs } from './session-store.ts'

declare module 'express-session' {
  interface SessionData {
    passport: { user?: number }
    /** answered by every act as X-Detent-Token */
    token: string
    /** whose password was right, and whose code is awaited; nobody is signed in yet */
    pending: { person: number; at: number }
    /** a second factor that is being set up, sealed; it counts once a code of it was entered */
    newSecondFactor: string
    /** when a code was last entered, ms since 1970 */
    codeAt: number
  }
}

const fallible = (work: (done: (error?: unknown) => void) => void) => new Promise<void>((done, fail) => work((error) => (error ? fail(error as Error) : done())))

/** Signs a person in: passport gives the session a new id. */
export async function beginSession(req: Request, person: Person, { codeAt }: { codeAt?: Date } = {}): Promise<void> {
  await fallible((done) => req.logIn(person as Express.User, done))
  req.session.token = randomBytes(24).toString('base64url')
  if (codeAt) req.session.codeAt = codeAt.getTime()
}

/** A new session that knows whose code is awaited, and nothing else. */
export async function awaitCode(req: Request, person: Person, now: Date): Promise<void> {
  await fallible((done) => req.session.regenerate(done))
  req.session.pending = { person: person.id, at: now.getTime() }
}

/** The same session under a new id, after its person showed anew who they are. */
export async function renewSession(session: Request['session']): Promise<void> {
  const { req } = session as Request['session'] & { req: Request }
  const { passport, token, codeAt } = session
  await fallible((done) => session.regenerate(done))
  Object.assign(req.session, { passport, token, ...(codeAt === undefined ? {} : { codeAt }) })
}

/** Sessions and sign-in on an app; returns its Passport for the sign-in route. */
export function useSessions(app: Express, services: Services, secret: string) {
  const { secure } = services.config
  app.use(
    session({
      store: new DatabaseSessionStore(services),
      secret,
      name: secure ? '__Host-detent' : 'detent',
      resave: false,
      saveUninitialized: false,
      cookie: { httpOnly: true, sameSite: 'lax', secure, path: '/', maxAge: idleMs },
    }),
  )
  const passport = new Passport()
  passport.use(
    new Strategy({ usernameField: 'email', passwordField: 'password' }, (email, password, done) => {
      checkCredentials(services.orm.em.fork(), email, password).then((person) => done(null, person ?? false), done)
    }),
  )
  passport.serializeUser((user, done) => done(null, (user as Person).id))
  passport.deserializeUser((id: number, done) => {
    services.orm.em
      .fork()
      .findOne(Person, { id, disabledAt: null })
      .then((person) => done(null, (person as Express.User | null) ?? false), done)
  })
  app.use(passport.initialize(), passport.session())
  return passport
}
