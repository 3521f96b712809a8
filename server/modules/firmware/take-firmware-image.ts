import { StoredFileProblem, type FileStore } from '../../db/file-store.ts'
import { DomainError } from '../../http/errors.ts'
import { firmwareName, imageOf, type FirmwareImage, type FirmwareVersion } from './firmware-version.entity.ts'

/**
 * The bytes of a version's firmware image, proven against the SHA-256 that was signed.
 *
 * @throws DomainError verification-failed naming the version and the file, recorded in the ledger
 */
export async function firmwareImageBytes(files: FileStore, version: FirmwareVersion, image: FirmwareImage): Promise<Uint8Array> {
  try {
    return await files.read(image.sha256)
  } catch (error) {
    if (!(error instanceof StoredFileProblem)) throw error
    throw new DomainError('verification-failed', `The firmware image of ${firmwareName(version)} (${image.name}, SHA-256 ${image.sha256}) is ${error.what === 'missing' ? 'missing from the file store' : 'not what was uploaded: its stored bytes were altered'}. It was not handed out; restore the file from a backup before anything is flashed.`, { recorded: true })
  }
}

export interface TakenImage {
  bytes: Uint8Array
  fileName: string
  sha256: string
}

/**
 * A version's firmware image for download, under a name that says which version it is, and marked unless published.
 *
 * @throws DomainError not-found, verification-failed
 */
export async function takeFirmwareImage(files: FileStore, version: FirmwareVersion): Promise<TakenImage> {
  const image = imageOf(version)
  if (!image) throw new DomainError('not-found', `${firmwareName(version)} has no firmware image. Nothing was downloaded.`)
  const bytes = await firmwareImageBytes(files, version, image)
  const mark = version.state === 'published' ? '' : `${version.state.toUpperCase()}_`
  return { bytes, fileName: `${mark}${version.line.key}-${version.version}.${image.format}`, sha256: image.sha256 }
}
