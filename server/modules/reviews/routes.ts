import { SignPeerReview, SignRelease } from '../../../shared/contract/reviews.ts'
import { mustMatch, route, type RouteSpec } from '../../http/route.ts'
import { actOnChange } from '../changes/act-on-change.ts'
import { again, onChange } from '../changes/locate.ts'
import { checkChange } from '../checks/check-change.ts'
import { prepare, proposalFor, releaseChange } from '../releases/release-change.ts'
import { contentOf } from './content-of.ts'
import { diffChange } from './diff-change.ts'
import { mustBeAnother, mustReenter } from './may-sign.ts'
import { recompute } from './recompute.ts'
import { signPeerReview } from './sign-peer-review.ts'

export const reviewRoutes: readonly RouteSpec[] = [
  route({ method: 'get', path: '/changes/:change/diff', summary: 'read what a change alters', access: 'read', place: onChange, handle: async ({ em, place }) => ({ body: await diffChange(em, place.change) }) }),
  route({
    method: 'get',
    path: '/changes/:change/version',
    summary: 'read the version proposed for a change',
    access: 'read',
    place: onChange,
    handle: async ({ services, em, place }) => {
      const { result } = await checkChange(services, em, place.change)
      return { body: await proposalFor(em, place.change, await contentOf(em, place.change, result)) }
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/sign',
    summary: 'sign a peer review',
    access: 'sign peer review',
    place: onChange,
    body: SignPeerReview,
    ifMatch: true,
    handle: async (call) => {
      const { change } = call.place
      mustMatch(call, change.revision)
      await mustBeAnother(call.em, change, call.person)
      await mustReenter(call.em, call.person, call.body.password)
      await recompute(call.services, call.em, change, call.body.contentHash)
      return actOnChange(call, (em, fresh) => signPeerReview(em, fresh, { contentHash: call.body.contentHash, person: call.person, now: call.now }))
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/release',
    summary: 'sign and release a change',
    access: 'sign release',
    place: onChange,
    body: SignRelease,
    ifMatch: true,
    handle: async (call) => {
      const { change } = call.place
      mustMatch(call, change.revision)
      await mustBeAnother(call.em, change, call.person)
      await mustReenter(call.em, call.person, call.body.password)
      const content = await recompute(call.services, call.em, change, call.body.contentHash)
      const request = { contentHash: call.body.contentHash, version: call.body.version, stepReason: call.body.stepReason ?? '', person: call.person, now: call.now }
      const prepared = await prepare(call.services, call.em, change, content, request)
      return call.act(async (em) => {
        const fresh = await again(em, change)
        mustMatch(call, fresh.revision)
        const release = await releaseChange(em, fresh, prepared, request)
        return { status: 201, body: { machine: fresh.machine.key, version: release.version } }
      })
    },
  }),
]
