import { Type } from '@sinclair/typebox'
import { CancelChange, changeStates, DescribeChange, DraftChange, EditValues, GoBackTo, InviteWriter, SaveText, type ChangeState, type DraftPointView } from '../../../shared/contract/changes.ts'
import { ReturnChange } from '../../../shared/contract/reviews.ts'
import type { Edit } from '../../../shared/parameters/edits.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { DomainError } from '../../http/errors.ts'
import { mustMatch, route, type RouteSpec } from '../../http/route.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may } from '../people/permissions.ts'
import { actOnChange } from './act-on-change.ts'
import { bringUpToDate, outOfDate } from './bring-up-to-date.ts'
import { Change, describe } from './change.entity.ts'
import { draftChange } from './draft-change.ts'
import { DraftPoint } from './draft-point.entity.ts'
import { inviteWriter } from './invite-writer.ts'
import { changeKey, onChange } from './locate.ts'
import { presentChange, presentSummaries } from './present.ts'
import { setOf } from './read-set.ts'
import { cancelChange, returnChange } from './return-change.ts'
import { goBackTo, mustWrite, saveDraftText, saveEdits } from './save-draft.ts'
import { prepareSubmission, submitChange } from './submit-change.ts'
import { tellSigners } from './tell-signers.ts'

const BringUpToDate = Type.Object({ decisions: Type.Array(Type.Object({ pointer: Type.String({ maxLength: 400 }), keep: Type.Union([Type.Literal('yours'), Type.Literal('theirs')]) }, { additionalProperties: false }), { maxItems: 5000 }) }, { additionalProperties: false })

export const changeRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/changes',
    query: { machine: { description: 'one machine, by its key', example: 'dunlin' }, state: { description: 'states, with commas between', example: 'draft,submitted' } },
    summary: 'list changes',
    access: 'signed-in',
    handle: async ({ em, held, query }) => {
      const readable = (await em.find(Machine, query.machine ? { key: query.machine } : {})).filter((m) => may(held, 'read', m.key).allowed)
      const states = query.state ? query.state.split(',').filter((s): s is ChangeState => (changeStates as readonly string[]).includes(s)) : [...changeStates]
      const changes = await em.find(Change, { machine: { $in: readable.map((m) => m.id) }, state: { $in: states } }, { populate: ['machine', 'author', 'baseRelease'], exclude: ['text'], orderBy: { alteredAt: 'desc' }, limit: 1000 } as never)
      return { body: await presentSummaries(em, changes as Change[]) }
    },
  }),
  route({
    method: 'post',
    path: '/changes',
    summary: 'draft a change',
    access: 'signed-in',
    body: DraftChange,
    handle: async (call) => {
      const { em, body, held, person, now } = call
      const machine = await em.findOne(Machine, { key: body.machine })
      if (!machine || !may(held, 'read', machine.key).allowed) throw new DomainError('not-found', `There is no machine "${body.machine}" that you may read. Nothing was made.`)
      const allowed = may(held, 'draft changes', machine.key)
      if (!allowed.allowed) throw new DomainError('not-permitted', `${allowed.why} Nothing was made.`, { recorded: true })
      return call.act(async (tx) => {
        const change = await draftChange(tx, { machine, title: body.title, reason: body.reason, person, now })
        return { status: 201, body: { key: changeKey(change) } }
      })
    },
  }),
  route({
    method: 'get',
    path: '/changes/:change',
    summary: 'read a change',
    access: 'read',
    place: onChange,
    handle: async ({ em, place, person, held, now }) => ({ body: await presentChange(em, place.change, { person, held, now }), etag: place.change.revision }),
  }),
  route({
    method: 'patch',
    path: '/changes/:change',
    summary: 'describe a change',
    access: 'draft changes',
    place: onChange,
    body: DescribeChange,
    ifMatch: true,
    handle: (call) =>
      actOnChange(call, async (_em, change) => {
        mustWrite(change, call.person)
        describe(change, call.body, call.now)
      }),
  }),
  route({
    method: 'patch',
    path: '/changes/:change/values',
    summary: 'edit values of a change',
    access: 'draft changes',
    place: onChange,
    body: EditValues,
    handle: (call) => actOnChange(call, (em, change) => saveEdits(em, change, call.body.edits as Edit[], call), { match: false }),
  }),
  route({
    method: 'put',
    path: '/changes/:change/text',
    summary: 'save the text of a change',
    access: 'draft changes',
    place: onChange,
    body: SaveText,
    ifMatch: true,
    handle: (call) => actOnChange(call, async (em, change) => void (await saveDraftText(em, change, call.body.text, call))),
  }),
  route({
    method: 'get',
    path: '/changes/:change/points',
    summary: 'list the draft points of a change',
    access: 'read',
    place: onChange,
    handle: async ({ em, place }) => {
      const points = await em.find(DraftPoint, { change: place.change }, { orderBy: { number: 'desc' }, populate: ['by'], limit: 500 })
      return { body: points.map((p): DraftPointView => ({ number: p.number, by: p.by.name, at: p.at.toISOString(), edits: p.edits })) }
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/back',
    summary: 'go back to a draft point',
    access: 'draft changes',
    place: onChange,
    body: GoBackTo,
    ifMatch: true,
    handle: (call) => actOnChange(call, (em, change) => goBackTo(em, change, call.body.point, call)),
  }),
  route({
    method: 'post',
    path: '/changes/:change/writers',
    summary: 'invite a writer to a change',
    access: 'draft changes',
    place: onChange,
    body: InviteWriter,
    handle: (call) => actOnChange(call, (em, change) => inviteWriter(em, change, call.body.person, call), { match: false }),
  }),
  route({
    method: 'get',
    path: '/changes/:change/schemas',
    summary: 'read the parameter schemas of a change',
    access: 'read',
    place: onChange,
    handle: async ({ em, place }) => {
      const now = await schemasFor(em, setOf(place.change.text))
      const base = await schemasFor(em, place.change.baseRelease?.set ?? emptySet())
      return { body: { ...base.documents, ...now.documents } }
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/submit',
    summary: 'submit a change',
    access: 'draft changes',
    place: onChange,
    ifMatch: true,
    handle: async (call) => {
      mustWrite(call.place.change, call.person)
      mustMatch(call, call.place.change.revision)
      const prepared = await prepareSubmission(call.services, call.em, call.place.change, call)
      return actOnChange(call, async (em, change) => {
        await submitChange(em, change, prepared, call)
        await tellSigners(em, change, { act: 'sign peer review', by: call.person, baseUrl: call.services.config.baseUrl, now: call.now })
      })
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/cancel',
    summary: 'cancel a change',
    access: 'draft changes',
    place: onChange,
    body: CancelChange,
    ifMatch: true,
    handle: (call) => actOnChange(call, (em, change) => cancelChange(em, change, { ...call.body, person: call.person, now: call.now })),
  }),
  route({
    method: 'post',
    path: '/changes/:change/return',
    summary: 'return a change',
    access: 'return changes',
    place: onChange,
    body: ReturnChange,
    ifMatch: true,
    handle: (call) => actOnChange(call, (em, change) => returnChange(em, change, { ...call.body, person: call.person, now: call.now })),
  }),
  route({
    method: 'get',
    path: '/changes/:change/up-to-date',
    summary: 'compare a change with the newest release',
    access: 'read',
    place: onChange,
    handle: async ({ em, place }) => {
      const state = await outOfDate(em, place.change)
      return { body: { newest: state?.newest.version ?? null, conflicts: state?.conflicts ?? [] } }
    },
  }),
  route({
    method: 'post',
    path: '/changes/:change/up-to-date',
    summary: 'bring a change up to date',
    access: 'draft changes',
    place: onChange,
    body: BringUpToDate,
    ifMatch: true,
    handle: (call) => actOnChange(call, (em, change) => bringUpToDate(em, change, call.body.decisions, call)),
  }),
]
