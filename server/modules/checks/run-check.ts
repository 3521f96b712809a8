import type { CheckResult } from '../../../shared/contract/checks.ts'
import type { CheckInputs } from './check-inputs.ts'

export function runCheck(_inputs: CheckInputs): CheckResult {
  throw new Error('being written')
}
