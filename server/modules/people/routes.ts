import { setTimeout as pause } from 'node:timers/promises'
import type { EntityManager } from '@mikro-orm/core'
import type { Request, Router } from 'express'
import type { PassportStatic } from 'passport'
import { AskReset, ChangePassword, InvitePerson, Nothing, RoleGrantRequest, SignIn, UseLink, type WorkplaceView } from '../../../shared/contract/people.ts'
import type { SignInAnswer } from '../../../shared/contract/second-factor.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type Answer, type Call, type Place, type RouteSpec } from '../../http/route.ts'
import type { Services } from '../../http/services.ts'
import { awaitCode, beginSession, renewSession } from '../../http/session.ts'
import { hashOf } from '../../http/session-store.ts'
import { validBody } from '../../http/validate.ts'
import { askReset } from './ask-reset.ts'
import { changePassword } from './change-password.ts'
import { reentered } from './check-credentials.ts'
import { confirmSigning } from './confirm-signing.ts'
import { demoSignIns, isDemoPassword } from './demo-sign-ins.ts'
import { disablePerson } from './disable-person.ts'
import { enablePerson } from './enable-person.ts'
import { endRole } from './end-role.ts'
import { freshPerson, nobodyHere, ofPerson, type OfPerson } from './find-person.ts'
import { grantRole } from './grant-role.ts'
import { invitePerson } from './invite-person.ts'
import { hashPassword } from './passwords.ts'
import { may } from './permissions.ts'
import type { Person } from './person.entity.ts'
import { everybody, presentMe, presentPeople, type Reader } from './present.ts'
import { resetSecondFactor } from './second-factor/reset-second-factor.ts'
import { sendReset } from './send-reset.ts'
import { endSession, listSessions } from './sessions.ts'
import { throttles } from './throttle.ts'
import { openLink, presentLink, useLink } from './use-link.ts'

/** An asked reset is answered no sooner, so that the time tells no more than the words whether the address is known. */
const resetAnswerMs = 300

const refusedSignIn = () => new DomainError('wrong-credentials', 'The name or the password is wrong, or this person may not sign in. Nothing was done.')

/** What people reach before they are signed in. */
export function publicPeopleRoutes(api: Router, services: Services, passport: Pick<PassportStatic, 'authenticate'>) {
  const { config, orm } = services
  const limits = throttles()

  api.get('/workplace', (_req, res) => {
    const signIns = config.mode === 'demo' ? demoSignIns.map((d) => ({ ...d, roles: d.roles.join(', ') })) : []
    res.set('Cache-Control', 'no-store').json({ mode: config.mode, secondFactor: config.secondFactor, signIns } satisfies WorkplaceView)
  })

  api.post('/session', ...limits.signIn, (req, res, next) => {
    const { password } = validBody<SignIn>(SignIn, req.body)
    const done = (error: unknown, person: Person | false | null) => {
      if (error) return next(error)
      if (!person || (config.mode === 'workplace' && isDemoPassword(password))) {
        req.log.warn({ event: 'sign-in refused', address: req.ip }, 'a sign-in was refused')
        return next(refusedSignIn())
      }
      const signedIn = !person.secondFactorAt
      req.log.info({ event: signedIn ? 'signed in' : 'code awaited', personId: person.id, address: req.ip }, 'a password was right')
      const step = signedIn ? beginSession(req, person) : awaitCode(req, person, services.now())
      step.then(() => void res.set('Cache-Control', 'no-store').json({ signedIn } satisfies SignInAnswer), next)
    }
    ;(passport.authenticate('local', done as never) as (...args: unknown[]) => void)(req, res, next)
  })

  api.post('/reset', ...limits.askReset, async (req, res) => {
    const { email } = validBody<{ email: string }>(AskReset, req.body)
    const work = orm.em.fork().transactional((em) => askReset(em, { email, baseUrl: config.baseUrl, now: services.now() }))
    const [done] = await Promise.allSettled([work, pause(resetAnswerMs)])
    // An answer that tells of a failure would tell of the address too.
    if (done.status === 'rejected') req.log.error({ err: done.reason as Error }, 'an asked reset failed')
    services.mailQueued()
    res.set('Cache-Control', 'no-store').status(202).json({ asked: true })
  })

  api.get('/links/:secret', ...limits.links, async (req, res) => {
    const link = await openLink(orm.em.fork(), req.params.secret as string, services.now())
    res.set('Cache-Control', 'no-store').json(presentLink(link))
  })

  api.post('/links/use', ...limits.links, async (req, res) => {
    const { secret, password } = validBody<UseLink>(UseLink, req.body)
    const { person } = await openLink(orm.em.fork(), secret, services.now())
    if (config.mode === 'workplace' && isDemoPassword(password))
      throw new DomainError('weak-password', 'This is a password of the demo workplace, which everybody can read. Nothing was altered; choose another.', { fields: [{ pointer: '/password', detail: 'is a demo password' }] })
    const passwordHash = await hashPassword(password, '/password', person)
    const used = await orm.em.fork().transactional((em) => useLink(em, { secret, passwordHash, now: services.now() }))
    services.mailQueued()
    res.set('Cache-Control', 'no-store').json(used)
  })
}

const readerOf = ({ person, held, services }: Pick<Call<unknown, Place>, 'person' | 'held' | 'services'>): Reader => ({ person, held, rule: services.config.secondFactor })

/** One person as the reader may see them. @throws DomainError not-found */
async function view(em: EntityManager, person: Pick<Person, 'id'>, call: Pick<Call<unknown, Place>, 'person' | 'held' | 'services'>) {
  const [seen] = await presentPeople(em, [await freshPerson(em, person)], readerOf(call))
  if (!seen) throw nobodyHere()
  return seen
}

/** An act on the person of the path, answered with the person as they are after it. */
const actOn = <B>(act: (em: EntityManager, call: Call<B, OfPerson>) => Promise<void>) => (call: Call<B, OfPerson>): Promise<Answer> =>
  call.act(async (em) => {
    await act(em, call)
    return { body: await view(em, call.place.found, call) }
  })

const idHash = (session: Request['session']) => ({ idHash: hashOf(session.id) })

export const peopleRoutes: readonly RouteSpec[] = [
  route({ method: 'get', path: '/me', summary: 'read who is signed in', access: 'signed-in', handle: async (call) => ({ body: await presentMe(call.em, readerOf(call), call.session.token ?? '') }) }),
  route({
    method: 'delete',
    path: '/session',
    summary: 'sign out',
    access: 'signed-in',
    async handle({ session, services }) {
      await new Promise<void>((done, fail) => session.destroy((error: unknown) => (error ? fail(error as Error) : done())))
      const { secure } = services.config
      return { body: { signedIn: false }, headers: { 'Set-Cookie': `${secure ? '__Host-detent' : 'detent'}=; Path=/; Max-Age=0; HttpOnly; SameSite=Lax${secure ? '; Secure' : ''}` } }
    },
  }),
  route({ method: 'get', path: '/account/sessions', summary: 'list own sessions', access: 'signed-in', handle: async ({ em, person, session, now }) => ({ body: { sessions: await listSessions(em, { person, current: idHash(session), now }) } }) }),
  route({
    method: 'delete',
    path: '/account/sessions/:session',
    summary: 'end an own session',
    access: 'signed-in',
    handle: ({ act, params, person, session, now }) =>
      act(async (em) => {
        await endSession(em, { id: params.session, person, now })
        return { body: { sessions: await listSessions(em, { person, current: idHash(session), now }) } }
      }),
  }),
  route({
    method: 'post',
    path: '/account/password',
    summary: 'change the own password',
    access: 'signed-in',
    body: ChangePassword,
    async handle({ em, act, body, person, session, now }) {
      if (!(await reentered(em, person, body.current)))
        throw new DomainError('wrong-password', 'The present password is wrong. Your password stays as it is; type it again.', { fields: [{ pointer: '/current', detail: 'is wrong' }], recorded: true })
      const passwordHash = await hashPassword(body.next, '/next', person)
      const answer = await act(async (tx) => ({ body: { sessionsEnded: await changePassword(tx, { person, passwordHash, keep: idHash(session), now }) } }))
      await renewSession(session)
      return answer
    },
  }),

  route({
    method: 'get',
    path: '/people',
    summary: 'list people',
    access: 'read',
    handle: async (call) => ({ body: { people: await presentPeople(call.em, await everybody(call.em), readerOf(call)), may: { invite: may(call.held, 'keep people', null) } } }),
  }),
  route({ method: 'get', path: '/people/:person', summary: 'read a person', access: 'read', place: ofPerson, handle: async (call) => ({ body: await view(call.em, call.place.found, call) }) }),
  route({
    method: 'post',
    path: '/people',
    summary: 'invite a person',
    access: 'keep people',
    body: InvitePerson,
    handle: (call) =>
      call.act(async (em) => {
        const invited = await invitePerson(em, { request: call.body, person: call.person, baseUrl: call.services.config.baseUrl, now: call.now })
        return { status: 201, body: await view(em, invited, call) }
      }),
  }),
  route({ method: 'post', path: '/people/:person/roles', summary: 'grant a role', access: 'keep people', place: ofPerson, body: RoleGrantRequest, handle: actOn((em, { place, body, person, now }) => grantRole(em, { to: place.found, asked: body, person, now })) }),
  route({ method: 'delete', path: '/people/:person/roles/:grant', summary: 'end a role', access: 'keep people', place: ofPerson, handle: actOn((em, { place, params, person, now }) => endRole(em, { of: place.found, grantId: params.grant, person, now })) }),
  route({ method: 'post', path: '/people/:person/confirm-signing', summary: 'confirm a signing right', access: 'signed-in', place: ofPerson, body: Nothing, handle: actOn((em, { place, person, services, now }) => confirmSigning(em, { of: place.found, person, rule: services.config.secondFactor, now })) }),
  route({ method: 'post', path: '/people/:person/disable', summary: 'disable a person', access: 'keep people', place: ofPerson, body: Nothing, handle: actOn((em, { place, person, now }) => disablePerson(em, { whom: place.found, person, now })) }),
  route({ method: 'post', path: '/people/:person/enable', summary: 'enable a person', access: 'keep people', place: ofPerson, body: Nothing, handle: actOn((em, { place, person, now }) => enablePerson(em, { whom: place.found, person, now })) }),
  route({ method: 'post', path: '/people/:person/reset', summary: 'send a reset link', access: 'keep people', place: ofPerson, body: Nothing, handle: actOn((em, { place, person, now, services }) => sendReset(em, { whom: place.found, person, baseUrl: services.config.baseUrl, now })) }),
  route({ method: 'post', path: '/people/:person/second-factor/reset', summary: 'reset a second factor', access: 'keep people', place: ofPerson, body: Nothing, handle: actOn((em, { place, person, now }) => resetSecondFactor(em, { whom: place.found, person, now })) }),
]
