import type { PolicyContent } from '../../../shared/contract/policy.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'

/** Everything a check depends on, and nothing else: equal inputs give equal results. */
export interface CheckInputs {
  modelVersion: string
  policyNumber: number
  policy: PolicyContent
  candidate: MachineSet
  base: MachineSet
  /** parameter schemas by firmware name, for every joint of both sets */
  schemas: Record<string, unknown>
  /** state of each of those firmware versions */
  firmwareStates: Record<string, 'draft' | 'published' | 'retired'>
}
