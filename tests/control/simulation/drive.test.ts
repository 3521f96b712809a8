/** The drive train alone against closed forms and balances. */
import { describe, expect, it } from 'vitest'
import { resistanceAt } from '../../../server/control/plant.ts'
import { Drive } from '../../../server/control/simulation/drive.ts'
import { bareMotor, compliantJoint, driveOf, rigidJoint } from './joints.ts'

describe('drive train between ticks', () => {
  it('raises the current of a locked rotor as v/R·(1 − e^(−t·R/L))', () => {
    const joint = rigidJoint({ plant: { tau_c: 1e6 } })
    const drive = new Drive(driveOf(joint))
    const R = resistanceAt(16, 25) + 0.5
    drive.v = 3
    for (let k = 1; k <= 50; k++) {
      drive.advance(1)
      expect(drive.x[0]).toBeCloseTo((3 / R) * -Math.expm1((-k * 1e-4 * R) / 0.0013), 14)
    }
    expect([drive.x[1], drive.x[2]]).toEqual([0, 0])
  })

  it('lets the speed decay as e^(−t·b/J) with the winding open', () => {
    const drive = new Drive(bareMotor({ J: 2e-3, b: 0.05, K: 1e-9, R: 1, L: 1, unit: 1e-3 }))
    drive.x[1] = 7
    for (let k = 0; k < 100; k++) drive.advance(1)
    expect(drive.x[1]).toBeCloseTo(7 * Math.exp((-0.1 * 0.05) / 2e-3), 12)
    expect(drive.x[2]).toBeCloseTo(((7 * 2e-3) / 0.05) * -Math.expm1((-0.1 * 0.05) / 2e-3), 12)
  })

  it('stops a coasting joint at the closed-form angle of friction and drag, for good', () => {
    // J·ω′ = −b·ω − τ from ω₀: rest after t = J/b·ln(1 + b·ω₀/τ), having turned (J·ω₀ − τ·t)/b.
    const [J, b, tau] = [1e-3, 0.004, 0.02]
    const drive = new Drive({ ...bareMotor({ J, b, K: 1, R: 1e-9, L: 1e9, unit: 1e-3 }), tau_c: tau, tau_s: tau })
    drive.x[0] = 0.1
    for (let k = 0; k < 100; k++) drive.advance(1)
    const [, speed, angle] = drive.x
    drive.x[0] = 0
    const stop = (J / b) * Math.log1p((b * speed) / tau)
    for (let k = 0; k < Math.floor(stop / 1e-3); k++) drive.advance(1)
    expect(drive.x[1]).toBeGreaterThan(0)
    drive.advance(1)
    expect(drive.x[1]).toBe(0)
    const rest = drive.x[2]
    // The winding is not quite open: it brakes with θ/L of its current, 3e-8 of the friction.
    expect(rest - angle).toBeCloseTo((J * speed - tau * stop) / b, 7)
    for (let k = 0; k < 500; k++) drive.advance(3)
    expect(drive.x[2]).toBe(rest)
  })

  it('decelerates by Coulomb friction to a stop at J·ω/τ, half way through an interval', () => {
    // Without drag and with an open winding: ω = ω₀ − τ·t/J.
    const [J, tau] = [1e-3, 0.02]
    const drive = new Drive({ ...bareMotor({ J, b: 0, K: 1, R: 1e-9, L: 1e9, unit: 1e-3 }), tau_c: tau, tau_s: tau })
    drive.x[0] = 3 * tau
    for (let k = 0; k < 10; k++) drive.advance(1)
    const speed = drive.x[1]
    expect(speed).toBeCloseTo((2 * tau * 0.01) / J, 9)
    drive.x[0] = 0
    const angle = drive.x[2]
    const stop = (J * speed) / tau
    const units = Math.floor(stop / 1e-3)
    for (let k = 0; k < units; k++) drive.advance(1)
    expect(drive.x[1]).toBeCloseTo(speed - (tau * units * 1e-3) / J, 9)
    for (let k = 0; k < 5; k++) drive.advance(1)
    expect(drive.x[1]).toBe(0)
    expect(drive.x[2] - angle).toBeCloseTo((J * speed * speed) / (2 * tau), 9)
  })

  it('holds a load below τ_s without a creep of one bit, and lets go above it', () => {
    const joint = rigidJoint()
    const held = new Drive(driveOf(joint, { theta_0: 0.123456789, tau_load: 0.0120999 }))
    for (let k = 0; k < 20_000; k++) held.advance(1 + (k % 4))
    expect([held.x[1], held.x[2]]).toEqual([0, 0.123456789])
    const slipping = new Drive(driveOf(joint, { tau_load: 0.0121001 }))
    slipping.advance(1)
    expect(slipping.x[1]).toBeLessThan(0)
  })

  it('needs τ_s to break away and τ_c to keep going', () => {
    const plain = bareMotor({ J: 1e-3, b: 0, K: 1, R: 1e-9, L: 1e9, unit: 1e-3 })
    const between = new Drive({ ...plain, tau_c: 0.02, tau_s: 0.05 })
    between.x[0] = 0.04
    between.advance(10)
    expect(between.x[1]).toBe(0)
    between.x[0] = 0.06
    between.advance(10)
    expect(between.x[1]).toBeCloseTo((0.04 * 0.01) / 1e-3, 9)
    between.x[0] = 0.021
    between.advance(10)
    expect(between.x[1]).toBeGreaterThan((0.04 * 0.01) / 1e-3)
  })

  it.each([0, 0.02])('keeps energy and momentum of two undamped inertias, backlash %s rad', (backlash) => {
    const joint = compliantJoint({ plant: { k_e: 0, b_rotor: 0, b_load: 0, d_s: 0, tau_c: 0, R_on: 0 } })
    const { plant } = joint
    const J_m = plant.eta * plant.N ** 2 * plant.J_rotor
    const drive = new Drive(driveOf(joint, { backlash, tau_c: 0, tau_s: 0 }))
    drive.x[1] = 3
    const energy = (): number => {
      const stretch = Math.max(0, Math.abs(drive.x[3]) - backlash / 2)
      return 0.5 * (J_m * drive.x[1] ** 2 + plant.J_load * drive.x[2] ** 2 + 4000 * stretch ** 2)
    }
    const momentum = (): number => J_m * drive.x[1] + plant.J_load * drive.x[2]
    const [E, M] = [energy(), momentum()]
    let stretched = 0
    for (let k = 0; k < 3000; k++) {
      drive.advance(1)
      stretched = Math.max(stretched, Math.abs(drive.x[3]))
      expect(Math.abs(energy() / E - 1)).toBeLessThan(1e-10)
      expect(Math.abs(momentum() / M - 1)).toBeLessThan(1e-11)
    }
    expect(stretched).toBeGreaterThan(backlash / 2)
    if (backlash > 0) expect(drive.switchings).toBeGreaterThan(20)
  })

  it('balances input power against copper, drag, friction and stored energy', () => {
    const joint = rigidJoint({ plant: { eta: 1 } })
    const { plant } = joint
    const drive = new Drive(driveOf(joint, { unit: 2e-6 }))
    const J = plant.J_load + plant.N ** 2 * plant.J_rotor
    drive.v = 6
    let supplied = 0
    let lost = 0
    let before = [0, 0]
    for (let k = 0; k < 20_000; k++) {
      drive.advance(1)
      const [i, w] = drive.x
      const power = (a: number[]): number => 16.5 * a[0] ** 2 + plant.b_load * a[1] ** 2 + plant.tau_c * Math.abs(a[1])
      supplied += 6 * ((before[0] + i) / 2) * 2e-6
      lost += ((power(before) + power([i, w])) / 2) * 2e-6
      before = [i, w]
    }
    const stored = 0.5 * plant.L * drive.x[0] ** 2 + 0.5 * J * drive.x[1] ** 2
    // Trapezoids at 2 µs against an electrical time constant of 80 µs: 1e-4 of the sum.
    expect(Math.abs(supplied - lost - stored)).toBeLessThan(1e-4 * supplied)
  })
})
