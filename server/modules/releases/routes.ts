import { WithdrawRelease } from '../../../shared/contract/releases.ts'
import { EXPORT_FORMATS, isExportFormat } from '../../exports/export-file.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { onChange } from '../changes/locate.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may } from '../people/permissions.ts'
import { onRelease } from './locate.ts'
import { mustBeTakeable, type Taking } from './may-take.ts'
import { presentRelease, presentReleases } from './present.ts'
import { recordDownload } from './record-download.ts'
import { Release } from './release.entity.ts'
import { takeBenchImage } from './take-bench-image.ts'
import { takeFile } from './take-file.ts'
import { takeKit } from './take-kit.ts'
import { withdrawRelease } from './withdraw-release.ts'

/** How a download is told in the ledger beside its hash. */
const told = ({ state, reason }: Taking) => ({ state, ...(reason === null ? {} : { reason }) })

export const releaseRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/releases',
    query: { machine: { description: 'one machine, by its key', example: 'dunlin' } },
    summary: 'list releases',
    access: 'signed-in',
    benchKey: true,
    handle: async ({ em, held, query }) => {
      const readable = (await em.find(Machine, query.machine ? { key: query.machine } : {})).filter((m) => may(held, 'read', m.key).allowed)
      const releases = await em.find(Release, { machine: { $in: readable.map((m) => m.id) } }, { populate: ['machine', 'releasedBy'], orderBy: { releasedAt: 'desc' }, limit: 500 })
      return { body: await presentReleases(em, releases) }
    },
  }),
  route({
    method: 'get',
    path: '/machines/:machine/releases/:version',
    summary: 'read a release',
    access: 'read',
    benchKey: true,
    place: onRelease,
    handle: async ({ em, place, held, now }) => ({ body: await presentRelease(em, place.release, held, now) }),
  }),
  route({
    method: 'get',
    path: '/machines/:machine/releases/:version/joints/:joint/image.:format',
    query: { reason: { description: 'why, for a release that is not current' }, board: { description: 'serial number of the board it is for' } },
    gives: '*/*',
    summary: 'download an image',
    access: 'download',
    benchKey: true,
    place: onRelease,
    handle: async ({ services, em, place, params, query, held, person, benchKey, now }) => {
      if (!isExportFormat(params.format)) throw new DomainError('not-found', `Images come as ${EXPORT_FORMATS.join(', ')}. Nothing was downloaded.`)
      const taking = await mustBeTakeable(em, place.release, { held, reason: query.reason, now })
      const { bytes, type, fileName, sha256 } = await takeFile(em, { release: place.release, joint: params.joint, format: params.format, taking, inHand: query.board })
      await recordDownload(services.orm, { act: 'release file downloaded', subject: { ...place.subject, joint: params.joint }, details: { format: params.format, sha256, ...told(taking), ...(query.board ? { board: query.board } : {}) }, person, benchKey, now })
      return { bytes, type, fileName, headers: { 'X-Detent-SHA256': sha256 } }
    },
  }),
  route({
    method: 'get',
    path: '/machines/:machine/releases/:version/kit.zip',
    query: { reason: { description: 'why, for a release that is not current' } },
    gives: 'application/zip',
    summary: 'download the kit of a release',
    access: 'download',
    costly: true,
    benchKey: true,
    place: onRelease,
    handle: async ({ services, em, place, query, held, person, benchKey, now }) => {
      const taking = await mustBeTakeable(em, place.release, { held, reason: query.reason, now })
      const { bytes, type, fileName, sha256 } = await takeKit(em, services.files, place.release, taking)
      await recordDownload(services.orm, { act: 'kit downloaded', subject: place.subject, details: { sha256, ...told(taking) }, person, benchKey, now })
      return { bytes, type, fileName, headers: { 'X-Detent-SHA256': sha256 } }
    },
  }),
  route({
    method: 'get',
    path: '/changes/:change/bench-image',
    query: {
      joint: { description: 'joint it is tried at', example: 'l1-knee', required: true },
      board: { description: 'serial number of the board it is for', example: 'H-0318', required: true },
      format: { description: 'bin, hex …', example: 'bin' },
    },
    gives: '*/*',
    summary: 'take a bench image of a change',
    access: 'draft changes',
    place: onChange,
    handle: async ({ services, em, place, query, held, person, benchKey, now }) => {
      const { joint = '', board = '', format = 'bin' } = query
      const { bytes, type, fileName, sha256 } = await takeBenchImage(services, em, place.change, { joint, board, format }, { person, held, benchKey, now })
      return { bytes, type, fileName, headers: { 'X-Detent-SHA256': sha256, 'X-Detent-Mark': 'UNRELEASED; bench only' } }
    },
  }),
  route({
    method: 'post',
    path: '/machines/:machine/releases/:version/withdraw',
    summary: 'withdraw a release',
    access: 'withdraw',
    place: onRelease,
    body: WithdrawRelease,
    handle: (call) =>
      call.act(async (em) => {
        if (call.body.version !== call.place.release.version) throw new DomainError('invalid-request', `Type the release's version, ${call.place.release.version}, to withdraw it. Nothing was altered.`, { fields: [{ pointer: '/version', detail: `is not ${call.place.release.version}` }] })
        await withdrawRelease(em, call.place.release, { reason: call.body.reason, person: call.person, now: call.now })
        await em.flush()
        return { body: await presentRelease(em, call.place.release, call.held, call.now) }
      }),
  }),
]
