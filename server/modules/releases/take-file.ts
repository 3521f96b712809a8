import type { EntityManager } from '@mikro-orm/core'
import type { ReleaseSummary } from '../../../shared/contract/releases.ts'
import { encodeImage } from '../../../shared/registers/encode-image.ts'
import { writeExport, type ExportFormat } from '../../exports/export-file.ts'
import { DomainError } from '../../http/errors.ts'
import { TOOL_VERSION } from '../../tool-version.ts'
import { boardBindingProblem } from '../boards/board-binding.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { splitFirmwareName } from '../firmware/firmware-authors.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { Joint } from '../machines/joint.entity.ts'
import { differencesFound } from './prove-image.ts'
import { ReleaseJoint } from './release-joint.entity.ts'
import type { Release } from './release.entity.ts'

export interface TakenFile {
  bytes: Uint8Array
  type: string
  fileName: string
  sha256: string
}

const equalBytes = (a: Uint8Array, b: Uint8Array) => a.length === b.length && a.every((byte, i) => byte === b[i])

/**
 * One file of a joint, made from the stored bytes, which are proven again before they leave: by their SHA-256, by encoding the signed
 * values anew, and by the second decoder.
 *
 * @param inHand  serial number of the board it is for, when the builder named it; else the board recorded at the joint counts
 * @throws DomainError not-found, verification-failed; wrong-state when its board-bound values belong to another board
 */
export async function takeFile(em: EntityManager, release: Release, jointKey: string, format: ExportFormat, state: ReleaseSummary['state'], inHand?: string): Promise<TakenFile> {
  const joint = await em.findOne(Joint, { machine: release.machine, key: jointKey })
  const row = joint && (await em.findOne(ReleaseJoint, { release, joint }, { populate: ['image', 'revision'] }))
  if (!row) throw new DomainError('not-found', `${release.machine.name} ${release.version} has no joint "${jointKey}". Nothing was downloaded.`)
  // A withdrawn release's files are for analysis, not for a board.
  const unfit = state === 'withdrawn' ? null : await boardBindingProblem(em, release, jointKey, inHand)
  if (unfit) throw new DomainError('wrong-state', `${unfit} Nothing was downloaded.`)
  const image = new Uint8Array(row.image)
  const { firmware, address, values } = row.revision.content
  const { documents, schemas } = await schemasFor(em, release.set)
  const signed = Object.fromEntries(values.map((v) => [v.name, v.value]))
  const encoded = encodeImage(schemas[firmware], signed, { release: release.sequence })
  const refuse = (why: string): never => {
    throw new DomainError('verification-failed', `The image of ${jointKey} in ${release.machine.name} ${release.version} is not what was signed: ${why} It was not handed out; restore it from a backup before anything is flashed.`)
  }
  if (sha256(image) !== row.imageSha256) refuse('the stored bytes do not match the SHA-256 that was signed.')
  if (encoded.kind === 'refused' || !equalBytes(encoded.image, image)) return refuse('the signed values encode to other bytes.')
  const [difference] = differencesFound(documents[firmware], image, signed, release.sequence)
  if (difference) refuse(difference)
  const file = writeExport(format, schemas[firmware], encoded, { machine: release.machine.key, joint: jointKey, firmware: splitFirmwareName(firmware), status: { kind: 'release', version: release.version, sequence: release.sequence }, device: address, toolVersion: TOOL_VERSION })
  const mark = state === 'current' ? '' : `${state.toUpperCase()}_`
  return { bytes: file.bytes, type: file.mediaType, fileName: `${mark}${file.name}`, sha256: sha256(file.bytes) }
}
