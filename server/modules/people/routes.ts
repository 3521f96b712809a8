import { randomBytes } from 'node:crypto'
import type { Router } from 'express'
import type { PassportStatic } from 'passport'
import { SignIn } from '../../../shared/contract/people.ts'
import { DomainError } from '../../http/errors.ts'
import type { RouteSpec } from '../../http/route.ts'
import type { Services } from '../../http/services.ts'
import { validBody } from '../../http/validate.ts'
import { heldRoles } from './held-roles.ts'
import type { Person } from './person.entity.ts'
import { presentMe } from './present.ts'

/** What people reach before they are signed in. */
export function publicPeopleRoutes(api: Router, _services: Services, passport: Pick<PassportStatic, 'authenticate'>) {
  api.post('/session', (req, res, next) => {
    validBody(SignIn, req.body)
    const done = (error: unknown, person: Person | false | null) => {
      if (error) return next(error)
      if (!person) return next(new DomainError('wrong-credentials', 'The name or the password is wrong, or this person may not sign in. Nothing was done.'))
      req.logIn(person as Express.User, (failed: unknown) => {
        if (failed) return next(failed)
        req.session.token = randomBytes(24).toString('base64url')
        res.json({ signedIn: true })
      })
    }
    ;(passport.authenticate('local', done as never) as (...args: unknown[]) => void)(req, res, next)
  })
}

export const peopleRoutes: readonly RouteSpec[] = [
  {
    method: 'get',
    path: '/me',
    summary: 'who is signed in',
    access: 'signed-in',
    handle: async ({ em, person, session }) => ({ body: presentMe(person, await heldRoles(em, person), session.token ?? '') }),
  },
]
