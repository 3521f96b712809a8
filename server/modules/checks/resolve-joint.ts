import { createHash } from 'node:crypto'
import { effectiveValues, type EffectiveValue } from '../../../shared/parameters/effective.ts'
import type { MachineSet, Values } from '../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import { encodeImage, type EncodedImage } from '../../../shared/registers/encode-image.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'
import type { FieldProblem } from '../../http/errors.ts'

/** A joint's parameter set as its board will hold it, or everything that keeps it from being encoded. */
export type ResolvedJoint =
  | { kind: 'resolved'; joint: string; schema: ParameterSchema; values: EffectiveValue[]; encoded: EncodedImage; imageSha256: string }
  | { kind: 'refused'; joint: string; problems: FieldProblem[] }

export const sha256 = (bytes: Uint8Array | string) => createHash('sha256').update(bytes).digest('hex')

/** Parameters that take a value on the board: read-only registers and constants have none to resolve. */
const takesValue = (schema: ParameterSchema) => schema.parameters.filter((p) => p.register !== null && p.register.access !== 'ro')

/** Where a value of a joint stands in the set, for a person to be led to. */
export function pointerOf(set: MachineSet, joint: string, parameter: string): string {
  const { family, values } = set.joints[joint]
  if (Object.hasOwn(values, parameter)) return toPointer(['joints', joint, 'values', parameter])
  if (Object.hasOwn(set.families[family]?.values ?? {}, parameter)) return toPointer(['families', family, 'values', parameter])
  return toPointer(['joints', joint])
}

/**
 * Resolves firmware default ← family ← joint, and encodes.
 *
 * @param schemas  by firmware name; a name that is missing is a problem of the joint
 * @param release  sequence number written into the image; 0: unreleased
 */
export function resolveJoint(set: MachineSet, joint: string, schemas: ReadonlyMap<string, ParameterSchema>, release: number): ResolvedJoint {
  const settings = set.joints[joint]
  const schema = schemas.get(settings.firmware)
  if (!schema) return { kind: 'refused', joint, problems: [{ pointer: toPointer(['joints', joint, 'firmware']), detail: `there is no firmware version "${settings.firmware}" to read its values by` }] }
  const address = schema.byRole.get('bus.address')
  const given: Values = { ...set.families[settings.family].values, ...settings.values }
  const twice = address && Object.hasOwn(given, address.name)
  const encoded = encodeImage(schema, address ? { ...given, [address.name]: settings.address } : given, { release })
  const problems: FieldProblem[] = encoded.kind === 'refused' ? encoded.problems.map((p) => ({ pointer: pointerOf(set, joint, p.parameter), detail: p.message })) : []
  if (twice) problems.push({ pointer: pointerOf(set, joint, address.name), detail: `${address.title} follows from the joint's address; take this value out and set the address` })
  if (encoded.kind === 'refused' || problems.length > 0) return { kind: 'refused', joint, problems }
  return { kind: 'resolved', joint, schema, values: effectiveValues(set, joint, takesValue(schema)), encoded, imageSha256: sha256(encoded.image) }
}
