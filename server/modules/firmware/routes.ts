import type { EntityManager } from '@mikro-orm/core'
import { DescribeFirmwareLine, DraftFirmwareVersion, EditFirmwareVersion, MakeFirmwareLine, SignFirmwareVersion } from '../../../shared/contract/firmware.ts'
import { DomainError } from '../../http/errors.ts'
import { mustMatch, route, type Answer, type Call, type RouteSpec } from '../../http/route.ts'
import { reentered } from '../people/check-credentials.ts'
import type { HeldRole } from '../people/permissions.ts'
import type { Person } from '../people/person.entity.ts'
import { describeFirmwareLine } from './describe-firmware-line.ts'
import { draftFirmwareVersion } from './draft-firmware-version.ts'
import { editFirmwareVersion } from './edit-firmware-version.ts'
import { FirmwareLine } from './firmware-line.entity.ts'
import { firmwareName, type FirmwareVersion } from './firmware-version.entity.ts'
import { again, onLine, onVersion, type OnVersion } from './locate.ts'
import { makeFirmwareLine } from './make-firmware-line.ts'
import { presentLines, presentVersion } from './present.ts'
import { readSchema } from './read-schema.ts'
import { publishFirmwareVersion, retireFirmwareVersion } from './sign-firmware-version.ts'

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

/** Publishing and retiring: the password is tried before the transaction (it is slow), everything else inside it. */
async function sign(call: Call<SignFirmwareVersion, OnVersion>, act: typeof publishFirmwareVersion): Promise<Answer> {
  if (!(await reentered(call.em, call.person, call.body.password)))
    throw new DomainError('wrong-password', `The password is wrong. Nothing was signed; ${firmwareName(call.place.version)} stays ${call.place.version.state}.`, { fields: [{ pointer: '/password', detail: 'is wrong' }], recorded: true })
  return call.act(async (em) => {
    const version = await again(em, call.place.version)
    await act(em, { version, schemaHash: call.body.schemaHash, person: call.person, now: call.now })
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
]
