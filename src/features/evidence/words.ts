import type { LogSignal } from '../../../shared/contract/evidence.ts'

/** Units offered for a signal; any other of its kind may be typed. */
export const usualUnits: Record<LogSignal, readonly string[]> = {
  time: ['s', 'ms', 'us'],
  'set-point': ['rad', 'deg', 'rad/s', 'rpm', 'A', 'mA'],
  position: ['rad', 'deg', 'turn'],
  speed: ['rad/s', 'deg/s', 'rpm'],
  current: ['A', 'mA'],
  voltage: ['V', 'mV'],
  duty: ['1', '%'],
}

/** "0.42 %": an error as a share of the measured span. */
export const share = (value: number): string => `${(100 * value).toPrecision(2)} %`
