import type { Express } from 'express'
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
  }
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
