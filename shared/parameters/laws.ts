import type { Role } from '../registers/roles.ts'

/** The parts of the controller that parameters belong to, in the order of the signal; what has no role comes last. */
export const laws = ['position law', 'velocity law', 'current law', 'limits', 'timing', 'supply', 'sensor and motor', 'mode and bus', 'other'] as const
export type Law = (typeof laws)[number]

const lawOfRole: Record<Role, Law> = {
  'position.kp': 'position law',
  'position.ki': 'position law',
  'velocity.kp': 'velocity law',
  'velocity.ki': 'velocity law',
  'velocity.window': 'velocity law',
  'current.kp': 'current law',
  'current.ki': 'current law',
  'current.limit': 'limits',
  'current.continuous': 'limits',
  'speed.limit': 'limits',
  'acceleration.limit': 'limits',
  'position.min': 'limits',
  'position.max': 'limits',
  'duty.limit': 'limits',
  'rate.current': 'timing',
  'rate.outer': 'timing',
  'output.delay': 'timing',
  'pwm.frequency': 'timing',
  'pwm.counts': 'timing',
  'supply.nominal': 'supply',
  'supply.compensated': 'supply',
  'encoder.offset': 'sensor and motor',
  'encoder.direction': 'sensor and motor',
  'motor.direction': 'sensor and motor',
  'control.mode': 'mode and bus',
  'bus.address': 'mode and bus',
  'bus.watchdog': 'mode and bus',
}

const order = Object.keys(lawOfRole)

/** The law a parameter belongs to by its role; "other" without one. */
export const lawOf = (role: string | null): Law => (role !== null && Object.hasOwn(lawOfRole, role) ? lawOfRole[role as Role] : 'other')

/** Groups things by law, in the order of the laws and, inside one, of the roles; what has no role keeps its order. Empty laws are left out. */
export function byLaw<T extends { role: string | null }>(things: readonly T[]): { law: Law; things: T[] }[] {
  const place = (t: T) => (t.role === null ? order.length : order.indexOf(t.role))
  const sorted = things.toSorted((a, b) => place(a) - place(b))
  return laws.flatMap((law) => {
    const own = sorted.filter((t) => lawOf(t.role) === law)
    return own.length > 0 ? [{ law, things: own }] : []
  })
}
