import type { MachineSet, Value } from './machine-set.ts'

/** Where an effective value comes from. */
export type Origin = 'firmware' | 'family' | 'joint'

export interface EffectiveValue {
  name: string
  value: Value
  origin: Origin
}

/** What resolving needs to know of a parameter: its name, its role and its firmware default. */
export interface ResolvedParameter {
  name: string
  role: string | null
  default: Value | null
}

/**
 * The effective values of one joint: firmware default ← family ← joint.
 *
 * The parameter with the role `bus.address` takes the joint's address. Parameters without any value are left out;
 * whether that is an error is the schema's to say.
 *
 * @throws RangeError when the set has no such joint, or the joint's family does not exist
 */
export function effectiveValues(set: MachineSet, jointKey: string, parameters: readonly ResolvedParameter[]): EffectiveValue[] {
  const joint = Object.hasOwn(set.joints, jointKey) ? set.joints[jointKey] : undefined
  if (!joint) throw new RangeError(`there is no joint ${jointKey}`)
  const family = Object.hasOwn(set.families, joint.family) ? set.families[joint.family] : undefined
  if (!family) throw new RangeError(`joint ${jointKey} names the family ${joint.family}, which does not exist`)
  return parameters.flatMap((p): EffectiveValue[] => {
    if (p.role === 'bus.address') return [{ name: p.name, value: joint.address, origin: 'joint' }]
    if (Object.hasOwn(joint.values, p.name)) return [{ name: p.name, value: joint.values[p.name], origin: 'joint' }]
    if (Object.hasOwn(family.values, p.name)) return [{ name: p.name, value: family.values[p.name], origin: 'family' }]
    return p.default === null ? [] : [{ name: p.name, value: p.default, origin: 'firmware' }]
  })
}

/** Effective values as a plain record, for the register codec. */
export const asRecord = (values: readonly EffectiveValue[]): Record<string, Value> => Object.fromEntries(values.map((v) => [v.name, v.value]))
