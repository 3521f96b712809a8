import { runCheck } from '../modules/checks/run-check.ts'
import type { CheckRunner } from './check-runner.ts'

/** Computes checks in the calling thread: for tests and the command line. */
export const inPlace: CheckRunner = {
  run: async (inputs) => runCheck(inputs),
  close: async () => {},
}
