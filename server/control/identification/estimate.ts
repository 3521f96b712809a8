/** One identified value, or why there is none and which run would give it. */

export type Estimate =
  | { kind: 'estimate'; value: number; standardError: number }
  | { kind: 'refused'; reason: string; remedy: string }

export function refused(reason: string, remedy: string): Estimate {
  return { kind: 'refused', reason, remedy }
}

export const RUNS = {
  voltage: 'Log the voltage on the motor (or the duty with the bus voltage) beside the current.',
  stall: 'Hold the joint still and step the current set-point between at least two levels of either sign.',
  speeds: 'Run the free joint at two or more steady speeds in both directions, the fastest near its limit.',
  fast: 'Log at the current task’s rate while the current set-point steps on a held joint.',
  acceleration: 'Step the set-point back and forth so that the joint accelerates and brakes hard in both directions.',
  reversals: 'Run at three or more steady speeds, slow to fast, in both directions.',
} as const
