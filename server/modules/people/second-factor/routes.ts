import type { Router } from 'express'
import { toString as qrCode } from 'qrcode'
import { BeginSecondFactor, EnterCode, ReenterBoth, codeMinutes, type RecoveryCodes, type SecondFactorBegun, type SignInAnswer } from '../../../../shared/contract/second-factor.ts'
import { DomainError } from '../../../http/errors.ts'
import { route, type Answer, type Call, type Place, type RouteSpec } from '../../../http/route.ts'
import type { Services } from '../../../http/services.ts'
import { beginSession, renewSession } from '../../../http/session.ts'
import { hashOf } from '../../../http/session-store.ts'
import { validBody } from '../../../http/validate.ts'
import { appendEntry } from '../../ledger/append-entry.ts'
import { reentered } from '../check-credentials.ts'
import { Person } from '../person.entity.ts'
import { throttles } from '../throttle.ts'
import { ownedBy, proveCode } from './prove-code.ts'
import { removeSecondFactor } from './remove-second-factor.ts'
import { renewRecoveryCodes } from './renew-recovery-codes.ts'
import { setUpSecondFactor } from './set-up-second-factor.ts'
import { addressOf, newSecret, stepOf, typed } from './totp.ts'

const notAwaited = () => new DomainError('not-signed-in', `No code is awaited here: enter your password first, then the code within ${codeMinutes} minutes. Nobody was signed in.`)

/** The second step of signing in: the code, after the password was right. */
export function publicSecondFactorRoutes(api: Router, services: Services) {
  const { orm, seals } = services
  api.post('/session/code', ...throttles().code, async (req, res) => {
    const { code } = validBody<{ code: string }>(EnterCode, req.body)
    const now = services.now()
    const { pending } = req.session
    const since = pending ? now.getTime() - pending.at : -1
    if (!pending || since < 0 || since > codeMinutes * 60_000) throw notAwaited()
    const person = await orm.em.fork().findOne(Person, { id: pending.person, disabledAt: null })
    if (!person) throw notAwaited()
    try {
      await orm.em.fork().transactional((em) => proveCode(em, { person, code, seals, now }))
    } catch (error) {
      req.log.warn({ event: 'code refused', personId: person.id, address: req.ip }, 'a code was refused')
      if (error instanceof DomainError && error.recorded)
        await orm.em.fork().transactional((em) => appendEntry(em, { at: now, person, act: 'refused', subject: { person: person.name }, details: { asked: 'sign in with a second factor', refusal: error.code, why: error.message } }))
      throw error
    }
    await beginSession(req, person, { codeAt: now })
    req.log.info({ event: 'signed in', personId: person.id, address: req.ip }, 'a code was right')
    services.mailQueued()
    res.set('Cache-Control', 'no-store').json({ signedIn: true } satisfies SignInAnswer)
  })
}

type Own<B> = Pick<Call<B, Place>, 'em' | 'person'>

/** @throws DomainError wrong-password (recorded) */
async function mustReenter({ em, person }: Own<unknown>, password: string) {
  if (!(await reentered(em, person, password))) throw new DomainError('wrong-password', 'The password is wrong. Nothing was altered; type it again.', { fields: [{ pointer: '/password', detail: 'is wrong' }], recorded: true })
}

const keepOf = (session: Call<unknown, Place>['session']) => ({ idHash: hashOf(session.id) })
const newOf = (person: Pick<Person, 'id'>) => `new ${ownedBy(person)}`

/** Runs an act that makes recovery codes: they go into the answer alone, not into its receipt. */
async function showOnce(call: Pick<Call<unknown, Place>, 'act'>, work: (em: Call<unknown, Place>['em']) => Promise<string[]>): Promise<Answer> {
  let recoveryCodes: string[] | null = null
  await call.act(async (em) => {
    recoveryCodes = await work(em)
    return { body: { recoveryCodes: null } satisfies RecoveryCodes }
  })
  return { body: { recoveryCodes } satisfies RecoveryCodes }
}

export const secondFactorRoutes: readonly RouteSpec[] = [
  route({
    method: 'post',
    path: '/account/second-factor',
    summary: 'begin to set up a second factor',
    access: 'signed-in',
    body: BeginSecondFactor,
    async handle(call) {
      const { person, session, services } = call
      if (person.secondFactorAt) throw new DomainError('wrong-state', 'A second factor is set up already. Nothing was altered; remove it first, then set up another.')
      await mustReenter(call, call.body.password)
      const secret = newSecret()
      session.newSecondFactor = services.seals.seal(secret, newOf(person))
      return { body: { secret: typed(secret), picture: await qrCode(addressOf(secret, person.email), { type: 'svg', margin: 4, errorCorrectionLevel: 'M' }) } satisfies SecondFactorBegun }
    },
  }),
  route({
    method: 'post',
    path: '/account/second-factor/confirm',
    summary: 'set up a second factor',
    access: 'signed-in',
    body: EnterCode,
    async handle(call) {
      const { person, session, services, now } = call
      const secret = session.newSecondFactor === undefined ? null : services.seals.open(session.newSecondFactor, newOf(person))
      if (!secret) throw new DomainError('wrong-state', 'No second factor is being set up in this session. Nothing was altered; begin anew on your account page.')
      const step = stepOf(secret, call.body.code.replaceAll(/\s/g, ''), now)
      if (step === null) throw new DomainError('wrong-code', 'The code is wrong. Nothing was set up; enter the one that your app shows now, and look at its clock if that is refused too.', { fields: [{ pointer: '/code', detail: 'is wrong' }] })
      const answer = await showOnce(call, (em) => setUpSecondFactor(em, { person, sealed: services.seals.seal(secret, ownedBy(person)), step, keep: keepOf(session), now }))
      session.codeAt = now.getTime()
      await renewSession(session)
      return answer
    },
  }),
  route({
    method: 'post',
    path: '/account/second-factor/remove',
    summary: 'remove the own second factor',
    access: 'signed-in',
    body: ReenterBoth,
    async handle(call) {
      const { person, session, services, now, body } = call
      await mustReenter(call, body.password)
      const answer = await call.act(async (em) => {
        await removeSecondFactor(em, { person, code: body.code, seals: services.seals, keep: keepOf(session), now })
        return { body: { removed: true } }
      })
      await renewSession(session)
      return answer
    },
  }),
  route({
    method: 'post',
    path: '/account/recovery-codes',
    summary: 'make new recovery codes',
    access: 'signed-in',
    body: ReenterBoth,
    async handle(call) {
      const { person, services, now, body } = call
      await mustReenter(call, body.password)
      return showOnce(call, (em) => renewRecoveryCodes(em, { person, code: body.code, seals: services.seals, now }))
    },
  }),
  route({
    method: 'post',
    path: '/account/code',
    summary: 'enter a code before signing',
    access: 'signed-in',
    body: EnterCode,
    async handle(call) {
      const answer = await call.act(async (em) => {
        await proveCode(em, { person: call.person, code: call.body.code, seals: call.services.seals, now: call.now })
        return { body: { until: new Date(call.now.getTime() + codeMinutes * 60_000).toISOString() } }
      })
      call.session.codeAt = call.now.getTime()
      return answer
    },
  }),
]
