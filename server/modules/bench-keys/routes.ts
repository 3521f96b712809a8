import { MakeBenchKey, type MadeBenchKey } from '../../../shared/contract/bench-keys.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { reentered } from '../people/check-credentials.ts'
import { makeBenchKey, newSecret } from './make-bench-key.ts'
import { presentKey, presentKeys } from './present.ts'
import { revokeBenchKey } from './revoke-bench-key.ts'

export const benchKeyRoutes: readonly RouteSpec[] = [
  route({ method: 'get', path: '/account/bench-keys', summary: 'list own bench keys', access: 'signed-in', handle: async (call) => ({ body: await presentKeys(call.em, call) }) }),
  route({
    method: 'post',
    path: '/account/bench-keys',
    summary: 'make a bench key',
    access: 'signed-in',
    body: MakeBenchKey,
    async handle(call) {
      const { name, machines, days, password } = call.body
      const { person, held, now } = call
      if (!(await reentered(call.em, person, password)))
        throw new DomainError('wrong-password', 'The password is wrong. No key was made; type it again.', { fields: [{ pointer: '/password', detail: 'is wrong' }], recorded: true })
      const secret = newSecret()
      let made = false
      const answer = await call.act(async (em) => {
        const key = await makeBenchKey(em, { name, machines, days, secret, person, held, now })
        made = true
        return { status: 201, body: { ...(await presentKeys(em, { person, held, now })), made: presentKey(key, now), secret: null } satisfies MadeBenchKey }
      })
      // The secret is put in after the answer was kept for a repeat: it stands nowhere but in this one answer.
      return made && 'body' in answer ? { ...answer, body: { ...(answer.body as MadeBenchKey), secret } } : answer
    },
  }),
  route({
    method: 'delete',
    path: '/account/bench-keys/:key',
    summary: 'revoke an own bench key',
    access: 'signed-in',
    handle: (call) =>
      call.act(async (em) => {
        await revokeBenchKey(em, { id: call.params.key, person: call.person, now: call.now })
        return { body: await presentKeys(em, call) }
      }),
  }),
]
