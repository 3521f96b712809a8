import type { Environment, Firmware, Plant } from './model.ts'

/** Copper's temperature coefficient at 20 °C, 1/K (IEC 60028, from memory). */
export const ALPHA_20 = 0.00393

/**
 * Winding resistance at temperature `T` in °C, from its value at 25 °C.
 *
 * @source control-model.md §1
 */
export function resistanceAt(R_25: number, T: number): number {
  return (R_25 * (1 + ALPHA_20 * (T - 20))) / (1 + ALPHA_20 * 5)
}

/**
 * The plant as `dx/dt = A·x + B·v + E·τ_load`, everything referred to the output.
 *
 * Rigid: x = [i, ω, θ]. Compliant: x = [i, ω_m, ω_l, δ, θ_l]. The last state is the free angle; its column in `A` is zero.
 */
export interface PlantMatrices {
  readonly n: number
  readonly compliant: boolean
  /** n × n, row by row. */
  readonly A: Float64Array
  /** Effect of the applied voltage. */
  readonly B: Float64Array
  /** Effect of a load torque at the output (friction enters as this too). */
  readonly E: Float64Array
  /** The angle that the encoder reads: θ_l, or θ_l + δ on the motor side. */
  readonly C_theta: Float64Array
  /** Rate of that angle as a row over the states. */
  readonly C_omega: Float64Array
}

/**
 * Continuous-time matrices of a drive train with its winding at `T_winding`.
 *
 * @source control-model.md §1
 */
export function plantMatrices(plant: Plant, T_winding: number): PlantMatrices {
  const { L, k_t, k_e, N, eta, J_load, b_load, k_s, d_s } = plant
  const R = resistanceAt(plant.R, T_winding) + plant.R_on
  const J_m = eta * N * N * plant.J_rotor
  const b_m = eta * N * N * plant.b_rotor
  const drive = eta * N * k_t
  if (k_s === null || d_s === null) {
    const J = J_load + J_m
    return {
      n: 3,
      compliant: false,
      A: Float64Array.of(-R / L, (-N * k_e) / L, 0, drive / J, -(b_load + b_m) / J, 0, 0, 1, 0),
      B: Float64Array.of(1 / L, 0, 0),
      E: Float64Array.of(0, -1 / J, 0),
      C_theta: Float64Array.of(0, 0, 1),
      C_omega: Float64Array.of(0, 1, 0),
    }
  }
  const motorSide = plant.encoder === 'motor'
  return {
    n: 5,
    compliant: true,
    A: Float64Array.of(
      -R / L, (-N * k_e) / L, 0, 0, 0,
      drive / J_m, -(b_m + d_s) / J_m, d_s / J_m, -k_s / J_m, 0,
      0, d_s / J_load, -(b_load + d_s) / J_load, k_s / J_load, 0,
      0, 1, -1, 0, 0,
      0, 0, 1, 0, 0,
    ),
    B: Float64Array.of(1 / L, 0, 0, 0, 0),
    E: Float64Array.of(0, 0, -1 / J_load, 0, 0),
    C_theta: Float64Array.of(0, 0, 0, motorSide ? 1 : 0, 1),
    C_omega: motorSide ? Float64Array.of(0, 1, 0, 0, 0) : Float64Array.of(0, 0, 1, 0, 0),
  }
}

/** Supply factor γ on the voltage request: 1 where the firmware compensates the supply. */
export function supplyFactor(plant: Plant, firmware: Firmware, environment: Environment): number {
  return firmware.supply_compensated ? 1 : environment.V_bus / plant.V_nom
}

/** One encoder count as an angle at the output, rad. */
export function encoderCount(plant: Plant): number {
  const count = (2 * Math.PI) / 2 ** plant.bits
  return plant.encoder === 'motor' ? count / plant.N : count
}

/**
 * Velocity quantum of the window estimate and the current ripple that it alone causes.
 *
 * @returns rad/s and A
 * @source control-model.md §7
 */
export function velocityQuantum(plant: Plant, firmware: Firmware): { readonly omega: number; readonly i: number } {
  const omega = (encoderCount(plant) * firmware.f_o) / firmware.W
  return { omega, i: omega * (firmware.K_pv + firmware.K_iv / firmware.f_o) }
}
