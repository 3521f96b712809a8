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
import { shortValue } from './short-value.ts'

const hex = (bytes: Uint8Array) => Buffer.from(bytes).toString('hex').toUpperCase().replace(/..(?=.)/g, '$& ')
const wordText = (value: number, bytes: number) => value.toString(16).toUpperCase().padStart(bytes * 2, '0')

/** Registers as the board will hold them, made from the signed values; refused when they are not the stored bytes. */
function registersOf(schema: ParameterSchema, row: ReleaseJoint, release: Release): { rows: CardRow[]; checksum: number | null } {
  const encoded = encodeImage(schema, Object.fromEntries(row.revision.content.values.map((v) => [v.name, v.value])), { release: release.sequence })
  if (encoded.kind === 'refused' || sha256(encoded.image) !== row.imageSha256 || sha256(new Uint8Array(row.image)) !== row.imageSha256)
    throw new DomainError('verification-failed', `The stored image of ${row.joint.key} in ${release.machine.name} ${release.version} is not what was signed. No card was made; restore it from a backup before anything is flashed.`)
  const rows = encoded.rows.filter((r) => r.access === 'rw').map((r): CardRow => ({ address: r.address, bytes: hex(r.bytes), parameter: r.parameter, title: r.title, unit: r.unit ?? '', value: shortValue(schema.byName.get(r.parameter)!, r.physical), bit: r.bit, width: r.width, boardBound: schema.byName.get(r.parameter)?.boardBound ?? false }))
  return { rows, checksum: encoded.checksum }
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
  const { checksum, layoutId } = schema.image
  const registers = registersOf(schema, row as ReleaseJoint, release)
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
    checksum: checksum && { algorithm: checksum.algorithm, value: wordText(registers.checksum!, checksum.bytes), address: checksum.address },
    layoutId: layoutId && wordText(layoutId.value, layoutId.bytes),
    rows: registers.rows,
    calibratedFor: settings.board ?? null,
    board: board ? (await presentBoards(em, [board as Board]))[0] : null,
    releaseUrl: `${baseUrl}/machines/${encodeURIComponent(machine.key)}/releases/${encodeURIComponent(release.version)}`,
    binding: bound,
    may: { download: mayDownload(machine.key, held, state), record: may(held, 'record flashes', machine.key) },
  }
}
