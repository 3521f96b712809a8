import { combine, dimension, sameDimension, type Dimension } from '../units/dimension.ts'

/** Quantities of the control model that a parameter may stand for. The list is closed. */
export const ROLES = [
  'position.kp', 'position.ki', 'position.min', 'position.max', 'velocity.kp', 'velocity.ki', 'velocity.window',
  'current.kp', 'current.ki', 'current.limit', 'current.continuous', 'speed.limit', 'acceleration.limit',
  'rate.current', 'rate.outer', 'output.delay', 'duty.limit', 'supply.nominal', 'supply.compensated',
  'pwm.frequency', 'pwm.counts', 'encoder.offset', 'encoder.direction', 'motor.direction', 'control.mode',
  'bus.address', 'bus.watchdog',
] as const
export type Role = (typeof ROLES)[number]

export const isRole = (text: unknown): text is Role => (ROLES as readonly unknown[]).includes(text)

const voltsPerAmp = { kg: 1, m: 2, s: -3, A: -2 }
const none = dimension({})
const perSecond = dimension({ s: -1 })
const counted = dimension({ count: 1 })

/** Dimensions a role's `x-unit` may have; a number without a unit has none. Roles missing here are switches. */
const DIMENSIONS: Partial<Record<Role, readonly Dimension[]>> = {
  'position.kp': [perSecond],
  'position.ki': [dimension({ s: -2 })],
  'position.min': [dimension({ rad: 1 })],
  'position.max': [dimension({ rad: 1 })],
  'velocity.kp': [dimension({ A: 1, s: 1, rad: -1 })],
  'velocity.ki': [dimension({ A: 1, rad: -1 })],
  'velocity.window': [counted, none],
  'current.kp': [dimension(voltsPerAmp)],
  'current.ki': [dimension({ ...voltsPerAmp, s: -4 })],
  'current.limit': [dimension({ A: 1 })],
  'current.continuous': [dimension({ A: 1 })],
  'speed.limit': [dimension({ rad: 1, s: -1 })],
  'acceleration.limit': [dimension({ rad: 1, s: -2 })],
  'rate.current': [perSecond],
  'rate.outer': [perSecond],
  'output.delay': [counted, none],
  'duty.limit': [none],
  'supply.nominal': [dimension({ kg: 1, m: 2, s: -3, A: -1 })],
  'pwm.frequency': [perSecond],
  'pwm.counts': [counted, none],
  'encoder.offset': [dimension({ rad: 1 }), counted],
  'bus.address': [none],
  'bus.watchdog': [dimension({ s: 1 })],
}

const SWITCHES: readonly Role[] = ['supply.compensated', 'encoder.direction', 'motor.direction', 'control.mode']

/** Roles whose firmware form may already contain the task's period. */
export const PER_TICK_ROLES: readonly Role[] = ['position.kp', 'position.ki', 'velocity.kp', 'velocity.ki', 'current.kp', 'current.ki']

/** Dimensions that a role's unit may have, `x-per-tick` counted in (a gain times a period); null for a switch, which has no unit. */
export function roleDimensions(role: Role, perTick: boolean): readonly Dimension[] | null {
  if (SWITCHES.includes(role)) return null
  const allowed = DIMENSIONS[role] ?? []
  return perTick ? allowed.map((d) => combine(d, dimension({ s: 1 }), 1)) : allowed
}

export const fitsRole = (role: Role, perTick: boolean, unit: Dimension): boolean =>
  (roleDimensions(role, perTick) ?? []).some((d) => sameDimension(d, unit))
