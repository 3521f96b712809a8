import type { CheckResult } from '../../shared/contract/checks.ts'
import type { CheckInputs } from '../modules/checks/check-inputs.ts'

/** Computes checks; on worker threads in the program, in place in tests. */
export interface CheckRunner {
  run(inputs: CheckInputs): Promise<CheckResult>
  close(): Promise<void>
}
