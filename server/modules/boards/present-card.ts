import type { EntityManager } from '@mikro-orm/core'
import type { BenchCard, CardRow } from '../../../shared/contract/boards.ts'
import { encodeImage } from '../../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { DomainError } from '../../http/errors.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { versionsNamed } from '../firmware/firmware-authors.ts'
import { schemaOf } from '../firmware/read-schema.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { mayDownload } from '../releases/permissions.ts'
import { presentReleases } from '../releases/present.ts'
import { ReleaseJoint } from '../releases/release-joint.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import { boardBindingProblem } from './board-binding.ts'
import { Board } from './board.entity.ts'
import { presentBoards } from './present.ts'

const hex = (bytes: Uint8Array) => Buffer.from(bytes).toString('hex').toUpperCase().replace(/..(?=.)/g, '$& ')
const wordText = (value: number, bytes: number) => value.toString(16).toUpperCase().padStart(bytes * 2, '0')

/** Registers as the board will hold them, made from the signed values; refused when they are not the stored bytes. */
function rowsOf(schema: ParameterSchema, row: ReleaseJoint, release: Release): CardRow[] {
  const encoded = encodeImage(schema, Object.fromEntries(row.revision.content.values.map((v) => [v.name, v.value])), { release: release.sequence })
  if (encoded.kind === 'refused' || sha256(encoded.image) !== row.imageSha256 || sha256(new Uint8Array(row.image)) !== row.imageSha256)
    throw new DomainError('verification-failed', `The stored image of ${row.joint.key} in ${release.machine.name} ${release.version} is not what was signed. No card was made; restore it from a backup before anything is flashed.`)
  return encoded.rows
    .filter((r) => r.access === 'rw')
    .map((r) => ({ address: r.address, bytes: hex(r.bytes), parameter: r.parameter, title: r.title, unit: r.unit ?? '', value: r.physical, bit: r.bit, width: r.width, boardBound: schema.byName.get(r.parameter)?.boardBound ?? false }))
}

/**
 * The bench card of one joint in one release.
 *
 * @throws DomainError not-found, verification-failed
 */
export async function presentCard(em: EntityManager, release: Release, jointKey: string, { held, baseUrl }: { held: readonly HeldRole[]; baseUrl: string }): Promise<BenchCard> {
  const machine = release.machine
  const row = await em.findOne(ReleaseJoint, { release, joint: { machine, key: jointKey } }, { populate: ['joint', 'revision', 'image'] })
  if (!row) throw new DomainError('not-found', `${machine.name} ${release.version} has no joint "${jointKey}". Choose one on the release's page.`)
  const settings = release.set.joints[jointKey]
  const [version] = await versionsNamed(em, [settings.firmware])
  const { schema } = schemaOf(version)
  const [{ state }] = await presentReleases(em, [release])
  const board = await em.findOne(Board, { joint: row.joint }, { populate: ['machine', 'joint', 'imageOf'] })
  const bound = await boardBindingProblem(em, release, jointKey)
  const image = new Uint8Array(row.image)
  const word = (r: { address: number; bytes: number }) => hex(image.subarray(r.address - schema.image.base, r.address - schema.image.base + r.bytes))
  const { checksum, layoutId } = schema.image
  const role = mayDownload(machine.key, held, state)
  return {
    machine: machine.key,
    machineName: machine.name,
    version: release.version,
    sequence: release.sequence,
    state,
    joint: jointKey,
    name: settings.name,
    family: release.set.families[settings.family].name,
    bus: release.set.buses[settings.bus].name,
    address: settings.address,
    revision: row.revision.number,
    firmware: settings.firmware,
    imageSha256: row.imageSha256,
    imageBytes: image.length,
    head: hex(image.subarray(0, 5)),
    checksum: checksum && { algorithm: checksum.algorithm, value: word(checksum), address: checksum.address },
    layoutId: layoutId && wordText(layoutId.value, layoutId.bytes),
    rows: rowsOf(schema, row as ReleaseJoint, release),
    calibratedFor: settings.board ?? null,
    board: board ? (await presentBoards(em, [board as Board]))[0] : null,
    releaseUrl: `${baseUrl}/machines/${encodeURIComponent(machine.key)}/releases/${encodeURIComponent(release.version)}`,
    may: { download: role.allowed && bound !== null ? { allowed: false, why: bound } : role, record: may(held, 'record flashes', machine.key) },
  }
}
