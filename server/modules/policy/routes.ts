import type { EntityManager } from '@mikro-orm/core'
import { DeclinePolicy, ProposePolicy, SignPolicy } from '../../../shared/contract/policy.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type Answer, type Call, type RouteSpec } from '../../http/route.ts'
import { onMachine, type OnMachine } from '../machines/locate.ts'
import { reentered } from '../people/check-credentials.ts'
import { declinePolicy } from './decline-policy.ts'
import { ofPolicy } from './find-policy.ts'
import { mayDecline, presentMachinePolicy } from './present.ts'
import { proposePolicy } from './propose-policy.ts'
import { mustNotBeAuthor, signPolicy } from './sign-policy.ts'

/** The machine's policy as it stands after an act. */
const answer = async (em: EntityManager, call: Pick<Call<unknown, OnMachine>, 'place' | 'person' | 'held'>, status = 200): Promise<Answer> => ({ status, body: await presentMachinePolicy(em, call.place.found, call) })

export const policyRoutes: readonly RouteSpec[] = [
  route({ method: 'get', path: '/machines/:machine/policy', summary: 'read the policy', access: 'read', place: onMachine, handle: (call) => answer(call.em, call) }),
  route({
    method: 'post',
    path: '/machines/:machine/policy',
    summary: 'propose a policy',
    access: 'propose policy',
    place: onMachine,
    body: ProposePolicy,
    handle: (call) =>
      call.act(async (em) => {
        await proposePolicy(em, { machine: call.place.found, request: call.body, baseUrl: call.services.config.baseUrl, person: call.person, now: call.now })
        return answer(em, call, 201)
      }),
  }),
  route({
    method: 'post',
    path: '/machines/:machine/policy/:number/sign',
    summary: 'sign a policy',
    access: 'sign policy',
    place: ofPolicy,
    body: SignPolicy,
    async handle(call) {
      const { em, place, person, now } = call
      mustNotBeAuthor(place.version, person)
      if (!(await reentered(em, person, call.body.password)))
        throw new DomainError('wrong-password', 'The password is wrong. Nothing was signed; type it again.', { fields: [{ pointer: '/password', detail: 'is wrong' }], recorded: true })
      return call.act(async (tx) => {
        await signPolicy(tx, { version: place.version, person, now })
        return answer(tx, call)
      })
    },
  }),
  route({
    method: 'post',
    path: '/machines/:machine/policy/:number/decline',
    summary: 'decline a policy',
    access: 'read',
    place: ofPolicy,
    body: DeclinePolicy,
    handle: (call) => {
      const declines = mayDecline(call.place.version, call)
      if (!declines.allowed) throw new DomainError('not-permitted', `${declines.why} Nothing was declined.`, { recorded: true })
      return call.act(async (em) => {
        await declinePolicy(em, { version: call.place.version, reason: call.body.reason, person: call.person, now: call.now })
        return answer(em, call)
      })
    },
  }),
]
