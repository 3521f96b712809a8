/** The simulation against a separate program by another integration, on joints chosen to be awkward. */
import { describe, expect, it } from 'vitest'
import type { JointModel } from '../../../server/control/model.ts'
import { simulate } from '../../../server/control/simulation/simulate.ts'
import type { SimulationOptions } from '../../../server/control/simulation/simulate.ts'
import { aStep, compliantJoint, rigidJoint } from './joints.ts'
import { plainRun } from './runge-kutta-run.ts'
import type { PlainOptions } from './runge-kutta-run.ts'

interface Awkward {
  name: string
  joint: JointModel
  options: SimulationOptions
  p: number
  q: number
}

const CASES: Awkward[] = [
  {
    name: 'rigid, no delay, uncompensated low supply, quantised',
    joint: rigidJoint({ firmware: { D: 0, supply_compensated: false }, V_bus: 9 }),
    options: aStep({ step_to: 0.2, t_end: 0.15, encoder_quantised: true, current_quantised: true }),
    p: 15, q: 4,
  },
  {
    name: 'rigid, two ticks of delay, break-away above sliding friction, all integrators',
    joint: rigidJoint({ plant: { tau_s: 0.03 }, firmware: { D: 2, K_ip: 200, K_pc: 2.6, K_ic: 52000 } }),
    options: aStep({ step_to: -0.05, theta_0: 0.3, t_end: 0.15 }),
    p: 15, q: 4,
  },
  {
    name: 'rigid against a load that back-drives it before the firmware takes hold',
    joint: rigidJoint(),
    options: aStep({ step_to: 0.1, tau_load: -0.05, t_end: 0.15 }),
    p: 15, q: 4,
  },
  {
    name: 'compliant, encoder on the motor, backlash, quantised, whole ratio',
    joint: compliantJoint({ plant: { encoder: 'motor', bits: 12 }, firmware: { f_c: 16000, f_o: 4000 } }),
    options: aStep({ step_to: 0.15, t_end: 0.15, backlash: 0.004, encoder_quantised: true, current_quantised: true }),
    p: 4, q: 1,
  },
  {
    name: 'compliant, backlash, friction, load, little damping, hunting',
    joint: compliantJoint({ plant: { d_s: 0.2, tau_c: 0.3, tau_s: 0.5 }, firmware: { K_ip: 300 } }),
    options: aStep({ step_to: 0.02, t_end: 0.2, backlash: 0.01, tau_load: 0.4 }),
    p: 15, q: 4,
  },
  {
    name: 'compliant velocity loop with late sensor and late reference',
    joint: compliantJoint({ firmware: { mode: 'velocity', f_c: 10000, f_o: 4000, sensor_delay: 1, outer_delay: 2, K_pv: 1, K_iv: 20 } }),
    options: aStep({ step_to: 2, t_end: 0.1, backlash: 0.002, encoder_quantised: true }),
    p: 5, q: 2,
  },
  {
    name: 'rigid, late sensor by three ticks',
    joint: rigidJoint({ firmware: { sensor_delay: 3 } }),
    options: aStep({ step_to: 0.1, t_end: 0.1 }),
    p: 15, q: 4,
  },
  {
    name: 'current loop of a compliant joint',
    joint: compliantJoint({ firmware: { mode: 'current', D: 2, K_pc: 10, K_ic: 20000 } }),
    options: aStep({ step_to: 0.4, t_end: 0.03, backlash: 0.003, current_quantised: true }),
    p: 15, q: 4,
  },
]

function largest(a: ArrayLike<number>): number {
  let size = 0
  for (let k = 0; k < a.length; k++) size = Math.max(size, Math.abs(a[k]))
  return size
}

function apart(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let size = 0
  for (let k = 0; k < a.length; k++) size = Math.max(size, Math.abs(a[k] - b[k]))
  return size / largest(b)
}

describe('against a Runge–Kutta run', () => {
  it('walks a winding whose time constant is far below the tick in bounded steps', () => {
    // L/R is 0.1 µs against ticks of 67 µs: a Taylor step would cover a six-hundredth of a tick.
    const joint = rigidJoint({ plant: { L: 1.65e-6 }, firmware: { K_pc: 0.2, K_ic: 50_000, mode: 'velocity' } })
    const options = aStep({ step_to: 0.4, t_end: 0.006, tau_load: 0.01 })
    const { traces, switchings } = simulate(joint, { ...options, trace_points: 1e6 })
    const plain = plainRun(joint, options as unknown as PlainOptions, 15, 4, 400)
    expect(switchings).toBeGreaterThan(0)
    expect(apart(traces.omega, plain.omega)).toBeLessThan(1e-6)
    expect(apart(traces.i, plain.i)).toBeLessThan(1e-6)
  })

  it.each(CASES.map((c) => [c.name, c] as const))('%s', (_, { joint, options, p, q }) => {
    const { traces, ticks } = simulate(joint, { ...options, trace_points: 1e6 })
    const plain = plainRun(joint, options as unknown as PlainOptions, p, q, 4)
    expect(plain.theta.length).toBe(ticks)
    expect(largest(plain.omega)).toBeGreaterThan(0)
    // Fourth-order steps of T_c/(4q) leave about 1e-8 of the range; §6 allows 1e-6.
    expect(apart(traces.theta, plain.theta)).toBeLessThan(1e-6)
    expect(apart(traces.omega, plain.omega)).toBeLessThan(1e-6)
    expect(apart(traces.i, plain.i)).toBeLessThan(1e-6)
    expect(apart(traces.u, plain.u)).toBeLessThan(1e-5)
  })
})
