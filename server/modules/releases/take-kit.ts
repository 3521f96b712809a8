import type { EntityManager } from '@mikro-orm/core'
import type { FileStore } from '../../db/file-store.ts'
import { jointFiles, packKit, readmeFor } from '../../exports/kit.ts'
import type { KitFile } from '../../exports/manifest.ts'
import { verifyKit } from '../../exports/verify-kit.ts'
import { DomainError } from '../../http/errors.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { schemasFor } from '../firmware/schemas-for.ts'
import { breathe } from './breathe.ts'
import { firmwareFilesOf } from './firmware-files.ts'
import type { Taking } from './may-take.ts'
import { notAsSigned } from './not-as-signed.ts'
import { proveJoint } from './prove-joint.ts'
import { ReleaseJoint } from './release-joint.entity.ts'
import type { Release } from './release.entity.ts'
import { signedKitOf, type SignedKit } from './signed-kit.ts'
import type { TakenFile } from './take-file.ts'
import { unfitJoints, type UnfitJoint } from './unfit-joints.ts'

/**
 * A kit holds every joint's bytes, so one joint whose downloads are refused refuses the kit: no reason opens another way to them.
 *
 * @throws DomainError wrong-state naming the joints
 */
function mustAllFit(unfit: readonly UnfitJoint[]) {
  if (unfit.length === 0) return
  throw new DomainError('wrong-state', `${unfit[0].why} The kit holds ${unfit.length === 1 ? 'this joint' : `${unfit.length} such joints (${unfit.map((u) => u.name).join(', ')})`}. Nothing was downloaded; take the files of the other joints one by one, or release the values measured on the new board.`)
}

function mustBeNamed(release: Release, kit: SignedKit, file: KitFile) {
  if (kit.digests.get(file.path) !== sha256(file.bytes)) throw notAsSigned(release, `The file ${file.path}`, 'made again, it has another SHA-256 than the manifest names.')
}

/**
 * The kit of a release, the same bytes every time: each image proven again, each file made again and held against the signed manifest, and
 * the finished .zip verified as anybody would.
 *
 * @throws DomainError not-found, wrong-state, verification-failed naming what is not as signed
 */
export async function takeKit(em: EntityManager, files: FileStore, release: Release, { state, mark }: Taking): Promise<TakenFile> {
  const kit = await signedKitOf(em, release)
  if (!kit) throw new DomainError('not-found', `${release.machine.name} ${release.version} was released before kits were kept. Nothing was downloaded; its images can be fetched joint by joint.`)
  // A withdrawn release's files are for analysis, not for a board.
  if (state !== 'withdrawn') mustAllFit(await unfitJoints(em, release))
  const schemas = await schemasFor(em, release.set)
  const made: KitFile[] = [...(await firmwareFilesOf(em, files, release.set)).files, readmeFor(kit.release, kit.signed.publicKey)]
  for (const row of await em.find(ReleaseJoint, { release }, { populate: ['joint', 'revision', 'image'], orderBy: { id: 'asc' } })) {
    const { schema, encoded, context } = proveJoint(release, row, schemas, kit.toolVersion)
    made.push(...jointFiles(schema, encoded, context))
    await breathe()
  }
  for (const file of made) mustBeNamed(release, kit, file)
  const missing = [...kit.digests.keys()].find((path) => !made.some((file) => file.path === path))
  if (missing !== undefined) throw notAsSigned(release, `The file ${missing}`, 'the manifest names it, and nothing makes it any more.')
  const zip = packKit(made, kit.signed)
  await breathe()
  const verified = verifyKit(zip, kit.signed.publicKey)
  if (verified.kind === 'refused') throw notAsSigned(release, 'The kit', verified.problems[0])
  return { bytes: zip, type: 'application/zip', fileName: `${mark}${release.machine.key}_${release.version}_kit.zip`, sha256: sha256(zip) }
}
