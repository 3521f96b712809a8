import type { EntityManager } from '@mikro-orm/core'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { FileStore } from '../../db/file-store.ts'
import { firmwarePath } from '../../exports/kit.ts'
import type { KitFile } from '../../exports/manifest.ts'
import { versionsNamed } from '../firmware/firmware-authors.ts'
import { firmwareName, imageOf } from '../firmware/firmware-version.entity.ts'
import { firmwareImageBytes } from '../firmware/take-firmware-image.ts'

export interface FirmwareFiles {
  /** by path in the kit */
  files: KitFile[]
  /** by firmware name; null where a version has no image */
  hashes: Record<string, string | null>
}

/**
 * The firmware images of every version that a set names, read and proven by their SHA-256.
 *
 * @throws DomainError verification-failed naming the first that is missing or altered
 */
export async function firmwareFilesOf(em: EntityManager, files: FileStore, set: MachineSet): Promise<FirmwareFiles> {
  const found: FirmwareFiles = { files: [], hashes: {} }
  for (const version of await versionsNamed(em, [...new Set(Object.values(set.joints).map((j) => j.firmware))])) {
    const image = imageOf(version)
    found.hashes[firmwareName(version)] = image?.sha256 ?? null
    if (image) found.files.push({ path: firmwarePath(version.line.key, version.version, image.format), bytes: await firmwareImageBytes(files, version, image) })
  }
  return found
}
