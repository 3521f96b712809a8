import type { EntityManager } from '@mikro-orm/core'
import type { ReleaseSummary } from '../../../shared/contract/releases.ts'
import { expectParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import { intelHex } from '../../exports/intel-hex.ts'
import { differencesFound } from '../../exports/verify/verify-image.ts'
import { DomainError } from '../../http/errors.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { Joint } from '../machines/joint.entity.ts'
import { ReleaseJoint } from './release-joint.entity.ts'
import type { Release } from './release.entity.ts'

export interface TakenImage {
  bytes: Uint8Array
  type: string
  fileName: string
  sha256: string
}

/**
 * The stored bytes of one joint, proven again before they leave: their SHA-256, and every value by the second decoder.
 *
 * @throws DomainError not-found, verification-failed
 */
export async function takeImage(em: EntityManager, release: Release, jointKey: string, format: 'bin' | 'hex', state: ReleaseSummary['state']): Promise<TakenImage> {
  const joint = await em.findOne(Joint, { machine: release.machine, key: jointKey })
  const row = joint && (await em.findOne(ReleaseJoint, { release, joint }, { populate: ['image', 'revision'] }))
  if (!row) throw new DomainError('not-found', `${release.machine.name} ${release.version} has no joint "${jointKey}". Nothing was downloaded.`)
  const image = new Uint8Array(row.image)
  const { documents } = await schemasFor(em, release.set)
  const document = documents[row.revision.content.firmware]
  const found = sha256(image) === row.imageSha256 ? differencesFound(document, image, Object.fromEntries(row.revision.content.values.map((v) => [v.name, v.value])), release.sequence) : ['the stored bytes do not match the SHA-256 that was signed.']
  if (found.length > 0) throw new DomainError('verification-failed', `The image of ${jointKey} in ${release.machine.name} ${release.version} is not what was signed: ${found[0]} It was not handed out; restore it from a backup before anything is flashed.`)
  const bytes = format === 'bin' ? image : intelHex(expectParameterSchema(document), image)
  const mark = state === 'current' ? '' : `-${state.toUpperCase()}`
  return { bytes, type: 'application/octet-stream', fileName: `${release.machine.key}-${release.version}-${jointKey}${mark}.${format}`, sha256: sha256(bytes) }
}
