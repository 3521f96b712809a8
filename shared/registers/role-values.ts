import { toSi } from '../units/quantity.ts'
import type { ParameterSchema, ParameterValue, ParameterValues } from './parameter-schema.ts'
import type { Role } from './roles.ts'

/** What a role's parameter says, for the control model. */
export interface RoleValue {
  readonly parameter: string
  readonly value: ParameterValue
  /** Number in SI (rad, rad/s, A, V, Hz, s; counts and plain numbers as they are); null for switches and enums. */
  readonly si: number | null
  /** The gain already contains the period of this task. */
  readonly perTick: 'current' | 'outer' | null
}

/**
 * Values by role, in SI.
 *
 * @param decoded  values as the board sees them (`EncodedImage.decoded`), never the typed ones
 */
export function roleValues(schema: ParameterSchema, decoded: ParameterValues): ReadonlyMap<Role, RoleValue> {
  const roles = new Map<Role, RoleValue>()
  for (const [role, parameter] of schema.byRole) {
    if (!Object.hasOwn(decoded, parameter.name)) continue
    const value = decoded[parameter.name]
    const numeric = parameter.kind === 'number' || parameter.kind === 'integer'
    const si = numeric && typeof value !== 'boolean' ? toSi(value, parameter.unit) : null
    roles.set(role, { parameter: parameter.name, value, si, perTick: parameter.perTick })
  }
  return roles
}
