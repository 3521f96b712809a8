import type { PolicyContent } from '../../../shared/contract/policy.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../../shared/registers/parameter-schema.ts'

/** Everything a check depends on, and nothing else: equal inputs give equal results. */
export interface CheckInputs {
  modelVersion: string
  policyNumber: number
  policy: PolicyContent
  candidate: MachineSet
  base: MachineSet
  /** by firmware name, for every joint of both sets; the hash names the document that the schema was read from */
  schemas: Record<string, { schema: ParameterSchema; hash: string }>
  /** state of each of those firmware versions */
  firmwareStates: Record<string, 'draft' | 'published' | 'retired'>
}
