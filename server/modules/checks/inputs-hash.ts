import canonicalize from 'canonicalize'
import type { CheckInputs } from './check-inputs.ts'
import { sha256 } from './resolve-joint.ts'

/** SHA-256 of the inputs' RFC 8785 form, schemas by their hashes: two checks with one hash are the same check. */
export const inputsHash = (inputs: CheckInputs): string =>
  sha256(canonicalize({ ...inputs, schemas: Object.fromEntries(Object.entries(inputs.schemas).map(([name, { hash }]) => [name, hash])) })!)
