import { WithdrawRelease } from '../../../shared/contract/releases.ts'
import { EXPORT_FORMATS, isExportFormat } from '../../exports/export-file.ts'
import { DomainError } from '../../http/errors.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may } from '../people/permissions.ts'
import { onRelease } from './locate.ts'
import { mayDownload } from './permissions.ts'
import { presentRelease, presentReleases } from './present.ts'
import { Release } from './release.entity.ts'
import { takeFile } from './take-file.ts'
import { withdrawRelease } from './withdraw-release.ts'

export const releaseRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/releases',
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
    handle: async ({ em, place, held }) => ({ body: await presentRelease(em, place.release, held) }),
  }),
  route({
    method: 'get',
    path: '/machines/:machine/releases/:version/joints/:joint/image.:format',
    summary: 'download an image',
    access: 'download',
    benchKey: true,
    place: onRelease,
    handle: async ({ em, place, params, query, held }) => {
      if (!isExportFormat(params.format)) throw new DomainError('not-found', `Images come as ${EXPORT_FORMATS.join(', ')}. Nothing was downloaded.`)
      const [{ state }] = await presentReleases(em, [place.release])
      const allowed = mayDownload(place.machine, held, state)
      if (!allowed.allowed) throw new DomainError('not-permitted', `${allowed.why} Nothing was downloaded.`, { recorded: true })
      const { bytes, type, fileName, sha256 } = await takeFile(em, place.release, params.joint, params.format, state, query.board)
      return { bytes, type, fileName, headers: { 'X-Detent-SHA256': sha256 } }
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
        return { body: await presentRelease(em, call.place.release, call.held) }
      }),
  }),
]
