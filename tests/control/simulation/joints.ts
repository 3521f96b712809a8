/** Joints for the simulation's tests. */
import type { Firmware, JointModel, Plant } from '../../../server/control/model.ts'
import type { DriveOptions } from '../../../server/control/simulation/drive-mode.ts'
import type { SimulationOptions } from '../../../server/control/simulation/simulate.ts'

const RIGID_PLANT: Plant = {
  V_nom: 12, R: 16, R_on: 0.5, L: 0.0013, k_t: 0.007232, k_e: 0.007232, N: 250, eta: 0.28, J_rotor: 1.5e-8, J_load: 2e-4,
  b_rotor: 0, b_load: 0.001297, k_s: null, d_s: null, tau_c: 0.0121, encoder: 'output', bits: 14, i_lsb: 0.001,
}
const COMPLIANT_PLANT: Plant = {
  V_nom: 24, R: 7.5, R_on: 0.25, L: 0.004, k_t: 0.027753, k_e: 0.027753, N: 100, eta: 0.55, J_rotor: 1e-6, J_load: 0.02,
  b_rotor: 4.372e-7, b_load: 0.002915, k_s: 4000, d_s: 2.5, tau_c: 0.0916, encoder: 'output', bits: 15, i_lsb: 0.002,
}

/** Small rigid gear motor, 15 kHz over 4 kHz. */
export function rigidJoint(change: { plant?: Partial<Plant>; firmware?: Partial<Firmware>; V_bus?: number } = {}): JointModel {
  return {
    plant: { ...RIGID_PLANT, ...change.plant },
    firmware: {
      mode: 'position', f_c: 15000, f_o: 4000, W: 16, D: 1, K_pp: 31.4159, K_ip: 0, K_pv: 0.172209, K_iv: 6.49213, K_pc: 5.19402,
      K_ic: 103673, omega_max: 5.02655, I_max: 0.5, d_max: 0.95, supply_compensated: true, ...change.firmware,
    },
    environment: { V_bus: change.V_bus ?? 12, T_winding: 25 },
  }
}

/** Larger joint with a springy gear, 15 kHz over 4 kHz. */
export function compliantJoint(change: { plant?: Partial<Plant>; firmware?: Partial<Firmware>; V_bus?: number } = {}): JointModel {
  return {
    plant: { ...COMPLIANT_PLANT, ...change.plant },
    firmware: {
      mode: 'position', f_c: 15000, f_o: 4000, W: 12, D: 1, K_pp: 25.1327, K_ip: 0, K_pv: 2.09931, K_iv: 52.7615, K_pc: 23.5445,
      K_ic: 48694.7, omega_max: 6.70206, I_max: 2.2, d_max: 0.95, supply_compensated: true, ...change.firmware,
    },
    environment: { V_bus: change.V_bus ?? 24, T_winding: 25 },
  }
}

export function aStep(change: Partial<Extract<SimulationOptions, { profile: 'step' }>> = {}): SimulationOptions {
  return { profile: 'step', step_to: 0.3, theta_0: 0, t_end: 0.3, encoder_quantised: false, current_quantised: false, tau_load: 0, backlash: 0, ...change }
}

/** A motor without gear, friction or switching losses. */
export function bareMotor(m: { J: number; b: number; K: number; R: number; L: number; unit: number }): DriveOptions {
  const plant: Plant = {
    V_nom: 1, R: m.R, R_on: 0, L: m.L, k_t: m.K, k_e: m.K, N: 1, eta: 1, J_rotor: m.J, J_load: 0, b_rotor: m.b, b_load: 0,
    k_s: null, d_s: null, tau_c: 0, encoder: 'output', bits: 16, i_lsb: 0,
  }
  return { plant, T_winding: 25, theta_0: 0, tau_load: 0, tau_c: 0, tau_s: 0, backlash: 0, unit: m.unit }
}

/** The drive train of a joint by itself. */
export function driveOf(joint: JointModel, change: Partial<DriveOptions> = {}): DriveOptions {
  const { plant, environment } = joint
  return {
    plant, T_winding: environment.T_winding, theta_0: 0, tau_load: 0, tau_c: plant.tau_c, tau_s: plant.tau_s ?? plant.tau_c,
    backlash: 0, unit: 1e-4, ...change,
  }
}
