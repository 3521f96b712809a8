import type { EntityManager } from '@mikro-orm/core'
import { CarryOver, DescribeFirmwareLine, DraftFirmwareVersion, EditFirmwareVersion, firmwareImageLimit, MakeFirmwareLine, SignFirmwareVersion } from '../../../shared/contract/firmware.ts'
import { DomainError } from '../../http/errors.ts'
import { mustMatch, route, type Answer, type Call, type RouteSpec } from '../../http/route.ts'
import { actOnChange } from '../changes/act-on-change.ts'
import { onChange } from '../changes/locate.ts'
import { appendEntry } from '../ledger/append-entry.ts'
import { reentered } from '../people/check-credentials.ts'
import type { HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { attachFirmwareImage, detachFirmwareImage, readFirmwareImage } from './attach-firmware-image.ts'
import { carryOverSet, previewCarryOver } from './carry-over-set.ts'
import { compareVersions } from './compare-versions.ts'
import { describeFirmwareLine } from './describe-firmware-line.ts'
import { draftFirmwareVersion } from './draft-firmware-version.ts'
import { dropFirmwareFile } from './drop-firmware-file.ts'
import { editFirmwareVersion } from './edit-firmware-version.ts'
import { FirmwareLine } from './firmware-line.entity.ts'
import { firmwareName, imageOf, type FirmwareVersion } from './firmware-version.entity.ts'
import { again, onLine, onVersion, type OnVersion } from './locate.ts'
import { makeFirmwareLine } from './make-firmware-line.ts'
import { mayDownloadImage, presentLines, presentVersion } from './present.ts'
import { readSchema } from './read-schema.ts'
import { publishFirmwareVersion, retireFirmwareVersion } from './sign-firmware-version.ts'
import { firmwareImageBytes, takeFirmwareImage } from './take-firmware-image.ts'

interface Reader {
  held: HeldRole[]
  person: Person
}

const lineAnswer = async (em: EntityManager, line: FirmwareLine, { held }: Reader, status = 200): Promise<Answer> => ({ status, body: (await presentLines(em, [line], held))[0] })

const versionAnswer = async (em: EntityManager, version: FirmwareVersion, { held, person }: Reader, status = 200): Promise<Answer> => ({
  status,
  body: await presentVersion(em, version, held, person),
  etag: version.revision,
})

/** Publishing and retiring: the password is tried and the image's file proven before the transaction (both are slow), everything else inside it. */
async function sign(call: Call<SignFirmwareVersion, OnVersion>, act: typeof publishFirmwareVersion): Promise<Answer> {
  if (!(await reentered(call.em, call.person, call.body.password)))
    throw new DomainError('wrong-password', `The password is wrong. Nothing was signed; ${firmwareName(call.place.version)} stays ${call.place.version.state}.`, { fields: [{ pointer: '/password', detail: 'is wrong' }], recorded: true })
  const image = imageOf(call.place.version)
  if (image && act === publishFirmwareVersion) await firmwareImageBytes(call.services.files, call.place.version, image)
  return call.act(async (em) => {
    const version = await again(em, call.place.version)
    await act(em, { version, schemaHash: call.body.schemaHash, imageHash: call.body.imageHash, person: call.person, now: call.now })
    return versionAnswer(em, version, call)
  })
}

export const firmwareRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/firmware',
    summary: 'firmware lines with their versions',
    access: 'read',
    benchKey: true,
    handle: async ({ em, held }) => ({ body: await presentLines(em, await em.find(FirmwareLine, {}), held) }),
  }),
  route({
    method: 'post',
    path: '/firmware',
    summary: 'make a firmware line',
    access: 'draft firmware',
    body: MakeFirmwareLine,
    handle: (call) => call.act(async (em) => lineAnswer(em, await makeFirmwareLine(em, { ...call.body, person: call.person, now: call.now }), call, 201)),
  }),
  route({
    method: 'patch',
    path: '/firmware/:line',
    summary: 'describe a firmware line',
    access: 'draft firmware',
    place: onLine,
    body: DescribeFirmwareLine,
    handle: (call) => call.act(async (em) => lineAnswer(em, await describeFirmwareLine(em, { ...call.body, line: call.place.line, person: call.person, now: call.now }), call)),
  }),
  route({
    method: 'post',
    path: '/firmware/:line/versions',
    summary: 'draft a firmware version',
    access: 'draft firmware',
    place: onLine,
    body: DraftFirmwareVersion,
    handle: (call) => {
      const read = readSchema(call.body.schemaText)
      return call.act(async (em) => versionAnswer(em, await draftFirmwareVersion(em, { ...call.body, line: call.place.line, read, person: call.person, now: call.now }), call, 201))
    },
  }),
  route({
    method: 'get',
    path: '/firmware/:line/:version',
    summary: 'a firmware version with its parameter schema',
    access: 'read',
    benchKey: true,
    place: onVersion,
    handle: (call) => versionAnswer(call.em, call.place.version, call),
  }),
  route({
    method: 'put',
    path: '/firmware/:line/:version',
    summary: 'edit a firmware draft',
    access: 'draft firmware',
    place: onVersion,
    body: EditFirmwareVersion,
    ifMatch: true,
    handle: (call) => {
      const read = readSchema(call.body.schemaText)
      return call.act(async (em) => {
        const version = await again(em, call.place.version)
        mustMatch(call, version.revision)
        await editFirmwareVersion(em, { ...call.body, version, read, person: call.person, now: call.now })
        return versionAnswer(em, version, call)
      })
    },
  }),
  route({
    method: 'post',
    path: '/firmware/:line/:version/publish',
    summary: 'publish a firmware version',
    access: 'publish firmware',
    place: onVersion,
    body: SignFirmwareVersion,
    handle: (call) => sign(call, publishFirmwareVersion),
  }),
  route({
    method: 'post',
    path: '/firmware/:line/:version/retire',
    summary: 'retire a firmware version',
    access: 'publish firmware',
    place: onVersion,
    body: SignFirmwareVersion,
    handle: (call) => sign(call, retireFirmwareVersion),
  }),
  route({
    method: 'put',
    path: '/firmware/:line/:version/image',
    summary: 'attach a firmware image to a draft',
    access: 'draft firmware',
    place: onVersion,
    ifMatch: true,
    upload: { field: 'image', limit: firmwareImageLimit },
    handle: async (call) => {
      const { file } = call.upload!
      mustMatch(call, call.place.version.revision)
      const image = await readFirmwareImage(call.upload!)
      const before = imageOf(call.place.version)
      // kept before the transaction that names it: a file that nothing names is harmless, a name without its file is not
      await call.services.files.keep(file)
      try {
        return await call.act(async (em) => {
          const version = await again(em, call.place.version)
          mustMatch(call, version.revision)
          await attachFirmwareImage(em, { version, image, person: call.person, now: call.now })
          return versionAnswer(em, version, call)
        })
      } finally {
        await file.discard()
        for (const sha256 of new Set([file.sha256, ...(before ? [before.sha256] : [])])) await dropFirmwareFile(call.services, sha256)
      }
    },
  }),
  route({
    method: 'delete',
    path: '/firmware/:line/:version/image',
    summary: 'take the firmware image of a draft away',
    access: 'draft firmware',
    place: onVersion,
    ifMatch: true,
    handle: async (call) => {
      const before = imageOf(call.place.version)
      const answer = await call.act(async (em) => {
        const version = await again(em, call.place.version)
        mustMatch(call, version.revision)
        await detachFirmwareImage(em, { version, person: call.person, now: call.now })
        return versionAnswer(em, version, call)
      })
      if (before) await dropFirmwareFile(call.services, before.sha256)
      return answer
    },
  }),
  route({
    method: 'get',
    path: '/firmware/:line/:version/image',
    gives: 'application/octet-stream',
    summary: 'download a firmware image',
    access: 'read',
    place: onVersion,
    benchKey: true,
    handle: async ({ services, place, held, person, now }) => {
      const allowed = mayDownloadImage(held)
      if (!allowed.allowed) throw new DomainError('not-permitted', `${allowed.why} Nothing was downloaded.`, { recorded: true })
      const { bytes, fileName, sha256 } = await takeFirmwareImage(services.files, place.version)
      await services.orm.em.fork().transactional((em) => appendEntry(em, { at: now, person, act: 'firmware image downloaded', subject: place.subject, details: { sha256, state: place.version.state } }))
      return { bytes, type: 'application/octet-stream', fileName, headers: { 'X-Detent-SHA256': sha256 } }
    },
  }),
  route({
    method: 'get',
    path: '/firmware/:line/:version/since/:before',
    summary: 'compare two versions of a firmware line',
    access: 'read',
    place: onVersion,
    handle: async ({ em, place, params }) => ({ body: compareVersions((await onVersion(em, { line: params.line, version: params.before })).version, place.version) }),
  }),
  route({
    method: 'get',
    path: '/changes/:change/carry-over',
    query: { to: { description: 'firmware version to carry over to', example: 'hinge 2.1.0', required: true }, joints: { description: 'joints, with commas between' }, family: { description: 'all joints of one family', example: 'knee' } },
    summary: 'read what carrying joints over to another firmware version alters',
    access: 'read',
    place: onChange,
    handle: async ({ em, place, query }) => ({
      body: await previewCarryOver(em, place.change, { to: query.to ?? '', ...(query.joints === undefined ? {} : { joints: query.joints.split(',') }), ...(query.family === undefined ? {} : { family: query.family }) }),
    }),
  }),
  route({
    method: 'post',
    path: '/changes/:change/carry-over',
    summary: 'carry joints over to another firmware version',
    access: 'draft changes',
    place: onChange,
    body: CarryOver,
    handle: (call) => actOnChange(call, (em, change) => carryOverSet(em, change, call.body, call), { match: false }),
  }),
]
