import fc from 'fast-check'
import type { Firmware, JointModel, Plant } from '../../server/control/model.ts'

/** Three gear motors of invented but coherent data (12 V, 24 V, 6 V), the ground for random plausible joints. */
export const MOTORS: readonly { readonly plant: Plant; readonly firmware: Firmware }[] = [
  {
    plant: { V_nom: 12, R: 16, R_on: 0.5, L: 0.0013, k_t: 0.007232, k_e: 0.007232, N: 250, eta: 0.28, J_rotor: 1.5e-8, J_load: 2e-4, b_rotor: 0, b_load: 0.001297, k_s: null, d_s: null, tau_c: 0.0121, encoder: 'output', bits: 14, i_lsb: 0.001 },
    firmware: { mode: 'position', f_c: 15000, f_o: 4000, W: 16, D: 1, K_pp: 31.4, K_ip: 0, K_pv: 0.172, K_iv: 6.49, K_pc: 5.19, K_ic: 103673, omega_max: 5, I_max: 0.5, d_max: 0.95, supply_compensated: true },
  },
  {
    plant: { V_nom: 24, R: 7.5, R_on: 0.25, L: 0.004, k_t: 0.027753, k_e: 0.027753, N: 100, eta: 0.55, J_rotor: 1e-6, J_load: 0.02, b_rotor: 4.372e-7, b_load: 0.002915, k_s: 4000, d_s: 2.5, tau_c: 0.0916, encoder: 'output', bits: 15, i_lsb: 0.002 },
    firmware: { mode: 'position', f_c: 15000, f_o: 4000, W: 12, D: 1, K_pp: 25.1, K_ip: 0, K_pv: 2.1, K_iv: 52.8, K_pc: 23.5, K_ic: 48695, omega_max: 6.7, I_max: 2.2, d_max: 0.95, supply_compensated: true },
  },
  {
    plant: { V_nom: 6, R: 9, R_on: 0.6, L: 0.00025, k_t: 0.006175, k_e: 0.006175, N: 120, eta: 0.5, J_rotor: 8e-9, J_load: 1.5e-4, b_rotor: 0, b_load: 0.0003769, k_s: null, d_s: null, tau_c: 0.00445, encoder: 'output', bits: 13, i_lsb: 0.001 },
    firmware: { mode: 'position', f_c: 16000, f_o: 4000, W: 8, D: 1, K_pp: 50.3, K_ip: 0, K_pv: 0.158, K_iv: 8.96, K_pc: 0.376, K_ic: 60319, omega_max: 6.3, I_max: 0.4, d_max: 0.95, supply_compensated: true },
  },
]

/** Factors between 1/r and r, even in the logarithm. */
const factor = (r: number): fc.Arbitrary<number> => fc.double({ min: -1, max: 1, noNaN: true }).map((x) => r ** x)

/** Pairs of rates: whole ratios, small fractions, and one long pattern. */
const RATES: readonly (readonly [number, number])[] = [
  [4000, 4000], [8000, 4000], [16000, 4000], [20000, 1000], [15000, 4000], [10000, 3000], [7000, 5000], [20000, 7000], [9000, 8000], [16500, 6000],
]

/** A plausible joint: a motor's data moved by factors, its loops re-gained, any timing the firmware allows. */
export const plausibleJoint: fc.Arbitrary<JointModel> = fc
  .record({
    motor: fc.constantFrom(...MOTORS),
    rates: fc.constantFrom(...RATES),
    W: fc.constantFrom(1, 2, 3, 5, 8, 16, 31),
    D: fc.constantFrom(0, 1, 1, 2),
    mode: fc.constantFrom<Firmware['mode']>('position', 'position', 'velocity', 'current'),
    sensor_delay: fc.constantFrom(0, 0, 0, 1, 3),
    outer_delay: fc.constantFrom(0, 0, 0, 1, 2),
    encoder: fc.constantFrom<Plant['encoder']>('output', 'motor'),
    inertia: factor(4),
    stiffness: factor(20),
    R: factor(1.3),
    L: factor(1.5),
    k: factor(1.3),
    K_pc: factor(2),
    K_ic: fc.oneof(fc.constant(0), factor(3), factor(3), factor(3)),
    K_pv: factor(4),
    K_iv: fc.oneof(fc.constant(0), factor(5), factor(5), factor(5)),
    K_pp: factor(4),
    K_ip: fc.oneof(fc.constant(0), fc.constant(0), factor(5)),
    T_winding: fc.double({ min: -20, max: 120, noNaN: true }),
    V_bus: factor(1.3),
    supply_compensated: fc.boolean(),
  })
  .map((x) => {
    const { plant, firmware } = x.motor
    return {
      plant: {
        ...plant,
        R: plant.R * x.R,
        L: plant.L * x.L,
        k_t: plant.k_t * x.k,
        k_e: plant.k_e * x.k,
        J_load: plant.J_load * x.inertia,
        k_s: plant.k_s === null ? null : plant.k_s * x.stiffness,
        encoder: x.encoder,
      },
      firmware: {
        ...firmware,
        f_c: x.rates[0],
        f_o: x.rates[1],
        W: x.W,
        D: x.D,
        mode: x.mode,
        sensor_delay: x.sensor_delay,
        outer_delay: x.outer_delay,
        K_pc: firmware.K_pc * x.K_pc,
        K_ic: firmware.K_ic * x.K_ic,
        K_pv: firmware.K_pv * x.K_pv,
        K_iv: firmware.K_iv * x.K_iv,
        K_pp: firmware.K_pp * x.K_pp,
        K_ip: 20 * x.K_ip * firmware.K_pp * (x.K_ip === 0 ? 0 : 1),
        supply_compensated: x.supply_compensated,
      },
      environment: { V_bus: plant.V_nom * x.V_bus, T_winding: x.T_winding },
    }
  })
