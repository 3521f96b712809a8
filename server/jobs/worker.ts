import type { CheckInputs } from '../modules/checks/check-inputs.ts'
import { runCheck } from '../modules/checks/run-check.ts'

/** Runs on a worker thread; never opens the database. */
export default (inputs: CheckInputs) => runCheck(inputs)
