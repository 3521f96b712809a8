import { RotateKey } from '../../../shared/contract/keys.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { reentered } from '../people/check-credentials.ts'
import { presentKeys } from './present.ts'
import { rotateKey } from './rotate-key.ts'

export const keyRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/keys',
    summary: 'read the public keys of the workplace',
    access: 'signed-in',
    handle: async ({ em, held }) => ({ body: await presentKeys(em, held) }),
  }),
  route({
    method: 'post',
    path: '/keys/rotate',
    summary: 'rotate the key of the workplace',
    access: 'keep keys',
    body: RotateKey,
    handle: async (call) => {
      if (!(await reentered(call.em, call.person, call.body.password)))
        throw new DomainError('wrong-password', 'The password is wrong. The key in use stays.', { fields: [{ pointer: '/password', detail: 'is wrong' }], recorded: true })
      return call.services.keys.rotate(async (next) => {
        // a repeat of the same request is answered from its receipt: then nothing was written for this key
        let written = false
        const answer = await call.act(async (em) => {
          await rotateKey(em, { next, replaces: call.body.keyId, person: call.person, now: call.now })
          await em.flush()
          written = true
          return { body: await presentKeys(em, call.held) }
        })
        return { written, answer }
      })
    },
  }),
]
