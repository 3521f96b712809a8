import type { EncodedImage } from '../../../shared/registers/encode-image.ts'
import { encodeImage } from '../../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { ExportContext } from '../../exports/export-context.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import { splitFirmwareName } from '../firmware/firmware-authors.ts'
import type { SchemasFor } from '../firmware/schemas-for.ts'
import { notAsSigned } from './not-as-signed.ts'
import { differencesFound } from './prove-image.ts'
import type { ReleaseJoint } from './release-joint.entity.ts'
import type { Release } from './release.entity.ts'

/** A stored joint of a release whose bytes were proven: what its files are made from. */
export interface ProvenJoint {
  schema: ParameterSchema
  encoded: EncodedImage
  context: ExportContext
}

const equalBytes = (a: Uint8Array, b: Uint8Array) => a.length === b.length && a.every((byte, i) => byte === b[i])

/**
 * Proves the stored bytes of a joint again: by their SHA-256, by the schema's hash, by encoding the signed values anew, and by the second
 * decoder.
 *
 * @param toolVersion  of the program that made the release's files; their headers name it
 * @throws DomainError verification-failed naming the joint
 */
export function proveJoint(release: Release, row: ReleaseJoint, { documents, schemas, hashes }: SchemasFor, toolVersion: string): ProvenJoint {
  const { key } = row.joint
  const refuse = (why: string): never => {
    throw notAsSigned(release, `The image of ${key}`, why)
  }
  const image = new Uint8Array(row.image)
  const { firmware, address, values, schemaHash } = row.revision.content
  if (sha256(image) !== row.imageSha256) refuse('the stored bytes do not match the SHA-256 that was signed.')
  if (hashes[firmware] !== schemaHash) refuse(`the schema of ${firmware} is not the one it was signed under.`)
  const signed = Object.fromEntries(values.map((v) => [v.name, v.value]))
  const encoded = encodeImage(schemas[firmware], signed, { release: release.sequence })
  if (encoded.kind === 'refused' || !equalBytes(encoded.image, image)) return refuse('the signed values encode to other bytes.')
  const [difference] = differencesFound(documents[firmware], image, signed, release.sequence)
  if (difference) refuse(difference)
  return {
    schema: schemas[firmware],
    encoded,
    context: { machine: release.machine.key, joint: key, firmware: splitFirmwareName(firmware), status: { kind: 'release', version: release.version, sequence: release.sequence }, device: address, toolVersion },
  }
}
