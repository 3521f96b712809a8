import { presencePages } from '../../../shared/contract/presence.ts'
import { MarkRead, SignPeerReview, SignRelease } from '../../../shared/contract/reviews.ts'
import { mustMatch, route, type RouteSpec } from '../../http/route.ts'
import { actOnChange } from '../changes/act-on-change.ts'
import { followChange, tellOf } from '../changes/events.ts'
import { again, onChange } from '../changes/locate.ts'
import { checkChange } from '../checks/check-change.ts'
import { prepare, proposalFor, releaseChange } from '../releases/release-change.ts'
import { tellSigners } from '../changes/tell-signers.ts'
import { contentOf } from './content-of.ts'
import { diffChange } from './diff-change.ts'
import { lookAtEffects } from './look-at-effects.ts'
import { mustBeAnother, mustBeReady, mustReenter } from './may-sign.ts'
import { markRead, presentReading, unmarkRead } from './reading.ts'
import { recompute } from './recompute.ts'
import { signPeerReview } from './sign-peer-review.ts'

export const reviewRoutes: readonly RouteSpec[] = [
  route({ method: 'get', path: '/changes/:change/diff', summary: 'read what a change alters', access: 'read', place: onChange, handle: async ({ em, place }) => ({ body: await diffChange(em, place.change) }) }),
  route({
    method: 'get',
    path: '/changes/:change/effects',
    summary: 'read what each altered value does alone',
    access: 'read',
    place: onChange,
    handle: async ({ services, em, place, person }) => ({ body: await lookAtEffects(services, em, place.change, person.id) }),
  }),
  route({
    method: 'get',
    path: '/changes/:change/events',
    query: { page: { description: 'page that is open, so that others see it', example: 'values' } }, gives: 'text/event-stream',
    summary: 'follow who has a change open and what they save',
    access: 'read',
    place: onChange,
    handle: async ({ services, place, person, query }) => ({ stream: followChange(services, place.change.id, { person, page: presencePages.find((p) => p === query.page) ?? 'values' }) }),
  }),
  route({
    method: 'get',
    path: '/changes/:change/reading',
    summary: 'read how far the rows of a change are read',
    access: 'read',
    place: onChange,
    handle: async ({ em, place, person, held }) => ({ body: await presentReading(em, place.change, person, held) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/reading',
    summary: 'mark rows of a change as read',
    access: 'return changes',
    place: onChange,
    body: MarkRead,
    handle: (call) =>
      call.act(async (em) => {
        const change = await again(em, call.place.change)
        await markRead(em, change, call.body.rows, call)
        return { body: await presentReading(em, change, call.person, call.held) }
      }),
  }),
  route({
    method: 'delete',
    path: '/changes/:change/reading/:row',
    summary: 'mark a row of a change as unread',
    access: 'return changes',
    place: onChange,
    handle: (call) =>
      call.act(async (em) => {
        const change = await again(em, call.place.change)
        await unmarkRead(em, change, call.params.row, call)
        return { body: await presentReading(em, change, call.person, call.held) }
      }),
  }),
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
      await mustBeReady(call.em, change, call.person, call.now)
      await mustReenter(call.em, call.person, call.body.password)
      await recompute(call.services, call.em, change, call.body.contentHash)
      return actOnChange(call, async (em, fresh) => {
        await signPeerReview(em, fresh, { contentHash: call.body.contentHash, person: call.person, now: call.now })
        if (fresh.state === 'approved') await tellSigners(em, fresh, { act: 'sign release', by: call.person, baseUrl: call.services.config.baseUrl, now: call.now })
      })
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
      await mustBeReady(call.em, change, call.person, call.now)
      await mustReenter(call.em, call.person, call.body.password)
      const content = await recompute(call.services, call.em, change, call.body.contentHash)
      const request = { contentHash: call.body.contentHash, version: call.body.version, stepReason: call.body.stepReason ?? '', person: call.person, now: call.now }
      const prepared = await prepare(call.services, call.em, change, content, request)
      const { id, revision } = change
      const answer = await call.act(async (em) => {
        const fresh = await again(em, change)
        mustMatch(call, fresh.revision)
        const release = await releaseChange(em, fresh, prepared, request)
        return { status: 201, body: { machine: fresh.machine.key, version: release.version } }
      })
      tellOf(call.services, id, { kind: 'moved', by: call.person.name, at: call.now.toISOString(), revision: revision + 1, state: 'released' })
      return answer
    },
  }),
]
