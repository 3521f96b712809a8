import { describe, expect, it } from 'vitest'
import { defaultPolicy } from '../../../shared/contract/policy.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { emptySet } from '../../../shared/parameters/machine-set.ts'
import { expectParameterSchema } from '../../../shared/registers/read-parameter-schema.ts'
import { computeHere } from '../../../server/jobs/flows.ts'
import type { StoredOutcome } from '../../../server/jobs/results.ts'
import { assembleCheck } from '../../../server/modules/checks/assemble-check.ts'
import type { CheckInputs } from '../../../server/modules/checks/check-inputs.ts'
import { inputsHash } from '../../../server/modules/checks/inputs-hash.ts'
import { packCheck, unpackCheck } from '../../../server/modules/checks/pack-check.ts'
import { nominalRequests, prepareCheck, toleranceRequests } from '../../../server/modules/checks/prepare-check.ts'
import { toleranceBox } from '../../../server/modules/checks/tolerance-box.ts'
import { hingeSchema, twoKnees } from '../../support/a-walker.ts'
import { aDriveTrain } from '../../support/a-set.ts'

const schemas = { 'hinge 2.1.0': { schema: expectParameterSchema(hingeSchema()), hash: 'h' } }
const inputsOf = (candidate: MachineSet, base: MachineSet = emptySet(), edit: Partial<CheckInputs> = {}): CheckInputs => ({ modelVersion: '1', policyNumber: 1, policy: defaultPolicy, candidate, base, schemas, firmwareStates: { 'hinge 2.1.0': 'published' }, ...edit })
const altered = (alter: (set: MachineSet) => void): MachineSet => {
  const set = twoKnees()
  alter(set)
  return set
}
async function checked(inputs: CheckInputs) {
  const check = prepareCheck(inputs)
  const known = new Map<string, StoredOutcome>()
  for (const asked of [...nominalRequests(check), ...toleranceRequests(check)]) known.set(asked.hash, await computeHere(asked))
  return assembleCheck(check, known)
}

describe('what a check asks to be computed', () => {
  it('is one of each for joints built alike, and nothing more for a base that is the same', () => {
    const same = prepareCheck(inputsOf(twoKnees(), twoKnees()))
    expect([nominalRequests(same).length, toleranceRequests(same).length]).toEqual([1, 1])
    const apart = prepareCheck(inputsOf(altered((s) => (s.joints['l1-knee'].values = { ...s.joints['l1-knee'].values, velocityGain: 3 })), twoKnees()))
    expect([nominalRequests(apart).length, toleranceRequests(apart).length]).toEqual([2, 2])
  })

  it('does not depend on what the model does not: addresses, offsets, names', () => {
    const hash = (set: MachineSet) => nominalRequests(prepareCheck(inputsOf(set))).map((a) => a.hash)
    expect(hash(altered((s) => { s.joints['l1-knee'].address = 0x20; s.joints['l1-knee'].values.encoderOffset = 1; s.joints['l1-knee'].name = 'another' }))).toEqual(hash(twoKnees()))
    expect(hash(altered((s) => (s.families.knee.driveTrain.J_load = 0.02)))).not.toEqual(hash(twoKnees()))
  })

  it('is computed on the values as the registers hold them', () => {
    const [a] = nominalRequests(prepareCheck(inputsOf(altered((s) => (s.families.knee.values.velocityGain = 3.2000000001)))))
    const [b] = nominalRequests(prepareCheck(inputsOf(twoKnees())))
    // q7.24 holds steps of 6e-8: both round to the same register
    expect(a.hash).toBe(b.hash)
  })
})

describe('the hash of a check’s inputs', () => {
  it('moves with policy, model, schema, firmware state and either set, and not with the order of members', () => {
    const base = inputsHash(inputsOf(twoKnees()))
    const reordered = altered((s) => (s.joints = Object.fromEntries(Object.entries(s.joints).reverse())))
    expect(inputsHash(inputsOf(reordered))).toBe(base)
    const moved = [
      inputsOf(twoKnees(), twoKnees()), inputsOf(twoKnees(), emptySet(), { policyNumber: 2 }), inputsOf(twoKnees(), emptySet(), { modelVersion: '2' }), inputsOf(twoKnees(), emptySet(), { firmwareStates: { 'hinge 2.1.0': 'retired' } }),
      inputsOf(twoKnees(), emptySet(), { schemas: { 'hinge 2.1.0': { ...schemas['hinge 2.1.0'], hash: 'i' } } }), inputsOf(altered((s) => (s.buses.fore.pullUp = 1600))),
    ].map(inputsHash)
    expect(new Set([base, ...moved]).size).toBe(moved.length + 1)
  })
})

describe('a check from the same results', () => {
  it('is the same, character for character, whatever order joints come in', async () => {
    const one = await checked(inputsOf(twoKnees()))
    const two = await checked(inputsOf(twoKnees()))
    expect(JSON.stringify(two)).toBe(JSON.stringify(one))
    const reordered = await checked(inputsOf(altered((s) => (s.joints = Object.fromEntries(Object.entries(s.joints).reverse())))))
    expect(reordered.counts).toEqual(one.counts)
    expect(reordered.findings.map((f) => f.key)).toEqual(one.findings.map((f) => f.key))
  })

  it('is packed with equal figures once, and unpacked again', async () => {
    const result = await checked(inputsOf(twoKnees()))
    const packed = packCheck(result)
    expect(packed.figures).toHaveLength(1)
    expect(unpackCheck(JSON.parse(JSON.stringify(packed)) as typeof packed)).toEqual(JSON.parse(JSON.stringify(result)))
  })

  it('has no findings over tolerances that are not known yet', () => {
    const check = prepareCheck(inputsOf(twoKnees()))
    const nothing = assembleCheck(check, new Map())
    expect(nothing.joints.every((j) => j.candidate === null)).toBe(true)
    expect(nothing.findings.some((f) => f.kind === 'bus watchdog')).toBe(true)
  })
})

describe('the tolerance box', () => {
  it('holds the bounded values and the efficiency up to 1/η_b', () => {
    const box = toleranceBox(aDriveTrain({ V_bus: { value: 12, low: 11, high: 13 } }))
    expect(box.map((b) => b.name)).toEqual(['V_bus', 'J_load', 'R', 'eta'])
    // control-model.md §1: η_b = 2 − 1/η (from memory); η = 0.75 gives 2/3
    expect(box.at(-1)).toMatchObject({ low: 0.75, nominal: 0.75, high: expect.closeTo(1.5, 12) as number })
  })
  it('ends at 1 where the gear is not driven back', () => expect(toleranceBox(aDriveTrain({ eta: 0.5 })).at(-1)).toMatchObject({ low: 0.5, high: 1 }))
  it('is empty where nothing is bounded and nothing is lost', () => expect(toleranceBox(aDriveTrain({ eta: 1, R: 1.2, J_load: 0.004 }))).toEqual([]))
  it('lets k_e follow k_t', () => {
    const bounded = (v: number) => ({ value: v, low: v * 0.9, high: v * 1.1 })
    expect(toleranceBox(aDriveTrain({ k_t: bounded(0.012), k_e: bounded(0.011) })).map((b) => b.name)).not.toContain('k_e')
    expect(toleranceBox(aDriveTrain({ k_e: bounded(0.011) })).map((b) => b.name)).toContain('k_e')
  })
  it('has no damping of a stiffness that is not there', () => expect(toleranceBox(aDriveTrain({ d_s: { value: 0.1, low: 0.05, high: 0.2 } })).map((b) => b.name)).not.toContain('d_s'))
})
