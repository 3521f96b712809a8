import type { EntityManager } from '@mikro-orm/core'
import type { FileStore } from '../../db/file-store.ts'
import { EXPORT_FORMATS } from '../../exports/export-file.ts'
import { sha256 } from '../../exports/record.ts'
import { Release } from '../releases/release.entity.ts'
import { ReleaseJoint } from '../releases/release-joint.entity.ts'
import { ReleaseKit } from '../releases/release-kit.entity.ts'
import { takeFile } from '../releases/take-file.ts'
import { takeKit } from '../releases/take-kit.ts'

/** Taken for analysis: neither the boards at the joints nor a later release have a say in whether the bytes are as signed. */
const forProof = { state: 'withdrawn', mark: '', reason: null } as const

export interface ReleasesProof {
  releases: number
  images: number
}

/** The signed content, hashed again. */
async function contentHolds(em: EntityManager, release: Release) {
  await em.populate(release, ['content'] as never)
  if (sha256(Buffer.from(release.content)) !== release.contentHash) throw new Error(`The content of ${release.machine.name} ${release.version} does not match the hash that was signed.`)
}

/**
 * Makes every file of every release again and holds it against what was signed: the whole kit where one was signed, each joint's files else.
 *
 * @throws Error naming the first release, and the file, that is not byte for byte as signed
 */
export async function proveReleases(em: EntityManager, files: FileStore): Promise<ReleasesProof> {
  const proof: ReleasesProof = { releases: 0, images: 0 }
  for (const { id } of await em.fork().find(Release, {}, { fields: ['id'], orderBy: { id: 'asc' } })) {
    const one = em.fork()
    const release = await one.findOneOrFail(Release, { id }, { populate: ['machine'] })
    await contentHolds(one, release)
    const joints = await one.find(ReleaseJoint, { release }, { populate: ['joint'] })
    const missing = Object.keys(release.set.joints).find((key) => !joints.some((row) => row.joint.key === key))
    if (missing !== undefined) throw new Error(`${release.machine.name} ${release.version} has no image for ${missing}.`)
    if ((await one.count(ReleaseKit, { release })) > 0) await takeKit(one, files, release, forProof)
    else for (const row of joints) for (const format of EXPORT_FORMATS) await takeFile(one, { release, joint: row.joint.key, format, taking: forProof })
    proof.releases += 1
    proof.images += joints.length
  }
  return proof
}
