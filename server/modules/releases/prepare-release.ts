import { encodeImage, type EncodedImage } from '../../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import { DomainError } from '../../http/errors.ts'
import { sha256 } from '../checks/resolve-joint.ts'
import type { Content } from '../reviews/content-of.ts'
import { breathe } from './breathe.ts'
import { differencesFound } from './prove-image.ts'

/** The bytes for each board of a release, proven by the second decoder. */
export interface PreparedJoint {
  joint: string
  schema: ParameterSchema
  encoded: EncodedImage
  sha256: string
}

/**
 * Encodes every joint with the release's sequence number, decodes the bytes by the second decoder and compares with the values.
 *
 * @throws DomainError verification-failed naming the joint, when the two ways of reading the bytes differ
 */
export async function prepareJoints(content: Content, sequence: number): Promise<PreparedJoint[]> {
  const prepared: PreparedJoint[] = []
  for (const [joint, { schema, values }] of content.joints) {
    const given = Object.fromEntries(values.map((v) => [v.name, v.value]))
    const encoded = encodeImage(schema, given, { release: sequence })
    if (encoded.kind === 'refused') throw new DomainError('verification-failed', `${joint} could not be encoded for sequence number ${sequence}: ${encoded.problems[0].message} Nothing was released.`)
    const document = content.schemaDocuments[content.set.joints[joint].firmware]
    const found = differencesFound(document, encoded.image, given, sequence)
    if (found.length > 0) throw new DomainError('verification-failed', `The second decoder reads other values from the image of ${joint}: ${found[0]} Nothing was released; report this before anything is flashed.`)
    prepared.push({ joint, schema, encoded, sha256: sha256(encoded.image) })
    await breathe()
  }
  return prepared
}
