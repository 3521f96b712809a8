import type { EntityManager } from '@mikro-orm/core'
import { logLimit, ReadLog, UseIdentified } from '../../../shared/contract/evidence.ts'
import { Nothing } from '../../../shared/contract/people.ts'
import { StoredFileProblem } from '../../db/file-store.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type Answer, type Call, type Place, type RouteSpec } from '../../http/route.ts'
import { changeKey, findChange, onChange, type OnChange } from '../changes/locate.ts'
import { onMachine, type OnMachine } from '../machines/locate.ts'
import { mustFit } from './choose-mapping.ts'
import { compare, drawLog, identifyFrom } from './compute.ts'
import type { Evidence } from './evidence.entity.ts'
import { mustStand, stateOf } from './evidence.entity.ts'
import { again, onEvidence, onJointOfChange, onReleasedJoint, type OnEvidence } from './locate.ts'
import { mustAttach } from './may-attach.ts'
import { presentEvidence, presentEvidenceList } from './present.ts'
import { beginReading, stopReading } from './readings.ts'
import { layoutOf, receiveEvidence } from './receive-evidence.ts'
import { removeEvidence } from './remove-evidence.ts'
import { checkForEvidence } from './renew-content.ts'
import { useIdentified } from './use-identified.ts'

const upload = { field: 'log', limit: logLimit, compress: true } as const

const view = async (call: Call<unknown, Place>, em: EntityManager, evidence: Evidence, status = 200): Promise<Answer> => ({ status, body: await presentEvidence(call.services, em, evidence, call) })

/** Looked at, then kept, then noted: a file that no row names is taken for none. */
async function receive(call: Call<unknown, Place>, at: Pick<Parameters<typeof receiveEvidence>[1], 'machine' | 'change'>): Promise<Answer> {
  const sent = call.upload!
  const layout = layoutOf(sent)
  if (at.change) await mustAttach(call.em, at.change, call.person)
  await call.services.files.keep(sent.file)
  return call.act(async (em) => {
    const evidence = await receiveEvidence(em, { ...at, joint: call.params.joint, upload: sent, layout, person: call.person, now: call.now })
    return view(call, em, await again(em, evidence), 201)
  })
}

const numberIn = (query: Record<string, string>, name: string): number | null => {
  if (query[name] === undefined || query[name] === '') return null
  const value = Number(query[name])
  if (!Number.isFinite(value)) throw new DomainError('invalid-request', `"${name}" takes a number; "${query[name]}" is none. Nothing was computed.`)
  return value
}

const temperatureIn = (query: Record<string, string>) => {
  const T = numberIn(query, 'T_winding') ?? 25
  if (T < -60 || T > 250) throw new DomainError('invalid-request', `A winding at ${T} °C is outside −60 to 250 °C. Nothing was computed.`, { fields: [{ pointer: '/T_winding', detail: 'takes −60 to 250 °C' }] })
  return T
}

export const evidenceRoutes: readonly RouteSpec[] = [
  route<never, OnMachine>({
    method: 'get', path: '/machines/:machine/evidence', query: { joint: { description: 'logs of one joint', example: 'l1-knee' } }, summary: 'bench logs of a machine', access: 'read', place: onMachine,
    handle: async ({ em, place, query }) => ({ body: await presentEvidenceList(em, place.found, { joint: query.joint }) }),
  }),
  route<never, OnChange>({
    method: 'get', path: '/changes/:change/evidence', summary: 'evidence of a change', access: 'read', place: onChange,
    handle: async ({ em, place }) => ({ body: await presentEvidenceList(em, place.change.machine, { change: place.change.id }) }),
  }),
  route<never, OnMachine>({
    method: 'post', path: '/machines/:machine/joints/:joint/evidence', summary: 'upload a bench log of a joint', access: 'upload evidence', place: onReleasedJoint as (em: EntityManager, params: Record<string, string>) => Promise<OnMachine>, upload, costly: true,
    handle: (call) => receive(call, { machine: call.place.found, change: null }),
  }),
  route<never, OnChange>({
    method: 'post', path: '/changes/:change/joints/:joint/evidence', summary: 'upload a bench log to a change', access: 'upload evidence', place: onJointOfChange, upload, costly: true,
    handle: (call) => receive(call, { machine: call.place.change.machine, change: call.place.change }),
  }),
  route<never, OnEvidence>({
    method: 'get', path: '/machines/:machine/evidence/:evidence', summary: 'a bench log', access: 'read', place: onEvidence,
    handle: (call) => view(call, call.em, call.place.evidence),
  }),
  route<typeof ReadLog, OnEvidence>({
    method: 'post', path: '/machines/:machine/evidence/:evidence/read', summary: 'read the columns of a bench log', access: 'upload evidence', place: onEvidence, body: ReadLog, costly: true,
    async handle(call) {
      const { evidence } = call.place
      const { mapping } = call.body as ReadLog
      mustStand(evidence, 'read')
      if (stateOf(evidence) === 'read') throw new DomainError('wrong-state', `The columns of ${evidence.name} are read already. Nothing was altered; upload the log again to read it otherwise.`)
      if (evidence.change) await mustAttach(call.em, evidence.change, call.person)
      mustFit(mapping, evidence.layout)
      const answer = await call.act(async (em) => {
        const fresh = await again(em, evidence)
        fresh.mapping = mapping
        await em.flush()
        beginReading(call.services, fresh, { mapping, person: call.person })
        return view(call, em, fresh, 202)
      })
      return answer
    },
  }),
  route<typeof Nothing, OnEvidence>({
    method: 'post', path: '/machines/:machine/evidence/:evidence/stop', summary: 'stop reading a bench log', access: 'upload evidence', place: onEvidence, body: Nothing,
    async handle(call) {
      stopReading(call.services, call.place.evidence)
      return view(call, call.em, call.place.evidence)
    },
  }),
  route<typeof Nothing, OnEvidence>({
    method: 'post', path: '/machines/:machine/evidence/:evidence/remove', summary: 'remove a bench log', access: 'upload evidence', place: onEvidence, body: Nothing,
    async handle(call) {
      const { evidence } = call.place
      const check = stateOf(evidence) === 'read' ? await checkForEvidence(call.services, call.em, evidence.change) : null
      stopReading(call.services, evidence)
      return call.act(async (em) => {
        const fresh = await again(em, evidence)
        await removeEvidence(em, fresh, { check, person: call.person, now: call.now })
        return view(call, em, fresh)
      })
    },
  }),
  route<never, OnEvidence>({
    method: 'get', path: '/machines/:machine/evidence/:evidence/file', gives: 'application/gzip', summary: 'a bench log as it was sent, gzipped', access: 'read', place: onEvidence,
    async handle({ services, place: { evidence } }) {
      const bytes = await services.files.read(evidence.storedSha256).catch((error: unknown) => {
        if (!(error instanceof StoredFileProblem)) throw error
        throw new DomainError('verification-failed', `The stored log ${evidence.name} is ${error.what}. It was not handed out; restore it from a backup.`, { recorded: true })
      })
      return { bytes, type: 'application/gzip', fileName: `${evidence.name}.gz`, headers: { 'X-Detent-SHA256': evidence.storedSha256 } }
    },
  }),
  route<never, OnEvidence>({
    method: 'get', path: '/machines/:machine/evidence/:evidence/series', query: { from: { description: 'begin, s' }, to: { description: 'end, s' }, pieces: { description: 'pieces that the stretch is cut into' } }, summary: 'a stretch of a bench log, drawn', access: 'read', place: onEvidence,
    handle: async ({ services, place, query }) => ({ body: await drawLog(services, place.evidence, { from: numberIn(query, 'from'), to: numberIn(query, 'to'), pieces: numberIn(query, 'pieces') ?? 700 }) }),
  }),
  route<never, OnEvidence>({
    method: 'get', path: '/machines/:machine/evidence/:evidence/comparison', query: { change: { description: 'values of this change, instead of the current release' }, from: { description: 'begin, s' } }, summary: 'a bench log beside its prediction', access: 'read', place: onEvidence, costly: true,
    handle: async ({ services, em, place, query }) => ({ body: await compare(services, em, place.evidence, { change: query.change, from: numberIn(query, 'from') }) }),
  }),
  route<never, OnEvidence>({
    method: 'get', path: '/machines/:machine/evidence/:evidence/identification', query: { change: { description: 'with the registers of this change' }, T_winding: { description: 'winding temperature, °C; 25 when absent' } }, summary: 'drive train values identified from a bench log', access: 'read', place: onEvidence, costly: true,
    handle: async ({ services, em, place, query }) => ({ body: await identifyFrom(services, em, place.evidence, { change: query.change, T_winding: temperatureIn(query) }) }),
  }),
  route<typeof UseIdentified, OnEvidence>({
    method: 'post', path: '/machines/:machine/evidence/:evidence/use', summary: 'use identified values in a draft', access: 'draft changes', place: onEvidence, body: UseIdentified, costly: true,
    async handle(call) {
      const asked = call.body as UseIdentified
      const { evidence } = call.place
      const change = asked.change === undefined ? null : await findChange(call.em, asked.change)
      if (asked.change !== undefined && change?.machine.id !== evidence.machine.id) throw new DomainError('not-found', `${evidence.machine.name} has no change "${asked.change}". Nothing was altered.`)
      const identified = await identifyFrom(call.services, call.em, evidence, { change: change ? changeKey(change) : 'release', T_winding: asked.T_winding })
      return call.act(async (em) => {
        const written = await useIdentified(em, evidence, { asked, change, identified, person: call.person, now: call.now })
        await em.flush()
        return { status: 201, body: { change: changeKey(written) } }
      })
    },
  }),
]
