import { AskMap, AskQuick, AskStretches, type CheckView, type StoppedView } from '../../../shared/contract/checks.ts'
import { AskRetune, AskStartingValues } from '../../../shared/contract/proposals.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import type { JobBoard } from '../../jobs/job-board.ts'
import type { Change } from '../changes/change.entity.ts'
import { onChange } from '../changes/locate.ts'
import { assembleCheck } from './assemble-check.ts'
import { CheckReport } from './check-report.entity.ts'
import { checkTopic, lookAtCheck, worded } from './look-at-check.ts'
import { mapStability, mapTopic } from './map-stability.ts'
import { quickCheck } from './quick-check.ts'
import { reportJoint } from './report-joint.ts'
import { retuneJoint, retuneTopic } from './retune-joint.ts'
import { rulerStretches } from './ruler-stretches.ts'
import { proposeStartingValues } from './starting-values.ts'
import { streamEvents } from './stream-events.ts'

export const checkRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/changes/:change/check',
    summary: 'read the check of a change',
    access: 'read',
    place: onChange,
    handle: async ({ services, em, place, person, now }) => {
      const look = await lookAtCheck(services, em, place.change, person.id)
      const kept = look.complete ? await em.findOne(CheckReport, { change: place.change, inputsHash: look.hash }, { fields: ['createdAt'] }) : null
      const view: CheckView = { ...assembleCheck(look.check, look.known), checkedAt: (kept?.createdAt ?? now).toISOString(), complete: look.complete, progress: look.progress }
      return { body: view }
    },
  }),
  route({
    method: 'get',
    path: '/changes/:change/check/events',
    gives: 'text/event-stream',
    summary: 'follow the check of a change',
    access: 'read',
    place: onChange,
    handle: async ({ services, place, person }) => ({ stream: streamEvents(services.checks, place.change, person.id) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/check/stop',
    summary: 'stop the check of a change',
    access: 'read',
    place: onChange,
    handle: async ({ services, place, person }) => {
      services.checks.stop(checkTopic(place.change))
      services.checks.stop(mapTopic(place.change, person.id))
      services.checks.stop(retuneTopic(place.change, person.id))
      return { body: stood(services.checks, place.change) }
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/check/resume',
    summary: 'go on with the check of a change',
    access: 'read',
    place: onChange,
    handle: async ({ services, place, person }) => {
      try {
        services.checks.resume(checkTopic(place.change))
        services.checks.resume(mapTopic(place.change, person.id))
        services.checks.resume(retuneTopic(place.change, person.id))
      } catch (error) {
        worded(error)
      }
      return { body: stood(services.checks, place.change) }
    },
  }),
  route({
    method: 'get',
    path: '/changes/:change/check/joints/:joint',
    summary: 'read the report on a joint of a change',
    access: 'read',
    place: onChange,
    handle: async ({ services, em, place, person, params }) => ({ body: await reportJoint(services, em, place.change, params.joint, person.id) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/check/map',
    summary: 'map the stability of a joint of a change',
    access: 'read',
    place: onChange,
    body: AskMap,
    handle: async ({ services, em, place, person, body }) => ({ body: await mapStability(services, em, place.change, body, person.id) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/check/quick',
    summary: 'check a joint of a change with edits that are not saved',
    access: 'read',
    place: onChange,
    body: AskQuick,
    handle: async ({ services, em, place, person, body }) => ({ body: await quickCheck(services, em, place.change, body, person.id) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/check/stretches',
    summary: 'see where values of a joint would make it unstable',
    access: 'read',
    place: onChange,
    body: AskStretches,
    handle: async ({ services, em, place, person, body }) => ({ body: await rulerStretches(services, em, place.change, body, person.id) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/check/starting-values',
    summary: 'ask for starting values of a joint',
    access: 'draft changes',
    place: onChange,
    body: AskStartingValues,
    handle: async ({ services, em, place, person, body }) => ({ body: await proposeStartingValues(services, em, place.change, body, person.id) }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/check/retune',
    summary: 'ask for a robust retune of a joint',
    access: 'draft changes',
    place: onChange,
    body: AskRetune,
    handle: async ({ services, em, place, person, body }) => ({ body: await retuneJoint(services, em, place.change, body, person.id) }),
  }),
]

const stood = (board: JobBoard, change: Change): StoppedView => ({ progress: board.progressOf(checkTopic(change)) })
