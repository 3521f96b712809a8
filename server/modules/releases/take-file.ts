import type { EntityManager } from '@mikro-orm/core'
import { writeExport, type ExportFormat } from '../../exports/export-file.ts'
import { jointPath } from '../../exports/kit.ts'
import { DomainError } from '../../http/errors.ts'
import { TOOL_VERSION } from '../../tool-version.ts'
import { boardBindingProblem } from '../boards/board-binding.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { Joint } from '../machines/joint.entity.ts'
import type { Taking } from './may-take.ts'
import { notAsSigned } from './not-as-signed.ts'
import { proveJoint } from './prove-joint.ts'
import { ReleaseJoint } from './release-joint.entity.ts'
import type { Release } from './release.entity.ts'
import { signedKitOf } from './signed-kit.ts'

export interface TakenFile {
  bytes: Uint8Array
  type: string
  fileName: string
  sha256: string
}

export interface FileWish {
  release: Release
  /** key of the joint */
  joint: string
  format: ExportFormat
  taking: Taking
  /** serial number of the board it is for, when the builder named it; else the board recorded at the joint counts */
  inHand?: string
}

/**
 * One file of a joint, made from the stored bytes, which are proven again before they leave; the file itself must be the one that the
 * signed manifest names.
 *
 * @throws DomainError not-found, verification-failed; wrong-state when its board-bound values belong to another board
 */
export async function takeFile(em: EntityManager, { release, joint: jointKey, format, taking: { state, mark }, inHand }: FileWish): Promise<TakenFile> {
  const joint = await em.findOne(Joint, { machine: release.machine, key: jointKey })
  const row = joint && (await em.findOne(ReleaseJoint, { release, joint }, { populate: ['image', 'revision', 'joint'] }))
  if (!row) throw new DomainError('not-found', `${release.machine.name} ${release.version} has no joint "${jointKey}". Nothing was downloaded.`)
  // A withdrawn release's files are for analysis, not for a board.
  const unfit = state === 'withdrawn' ? null : await boardBindingProblem(em, release, jointKey, inHand)
  if (unfit) throw new DomainError('wrong-state', `${unfit} Nothing was downloaded.`)
  const kit = await signedKitOf(em, release)
  const proven = proveJoint(release, row, await schemasFor(em, release.set), kit?.toolVersion ?? TOOL_VERSION)
  const file = writeExport(format, proven.schema, proven.encoded, proven.context)
  const hash = sha256(file.bytes)
  if (kit && kit.digests.get(jointPath(jointKey, file.name)) !== hash) throw notAsSigned(release, `The file ${file.name}`, 'made again, it has another SHA-256 than the manifest names.')
  return { bytes: file.bytes, type: file.mediaType, fileName: `${mark}${file.name}`, sha256: hash }
}
