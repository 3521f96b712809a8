import { describe, expect, it } from 'vitest'
import { analyse } from '../../../server/control/analyse.ts'
import type { Firmware, Plant } from '../../../server/control/model.ts'
import { plantMatrices } from '../../../server/control/plant.ts'
import { continuousCurrent, steadyTemperature } from '../../../server/control/simulation/winding-heat.ts'
import { entries, entryOf } from './entry.ts'

const list = entries('trade-values')

/** A motor as the entries describe it; friction and drag are given at the motor. */
function plantOf(inputs: Record<string, unknown>): Plant {
  const of = (name: string): number => inputs[name] as number
  const N = of('gear_ratio')
  const eta = of('gear_efficiency')
  return {
    V_nom: of('V'), R: of('R_ohm'), R_on: 0, L: of('L_H'), k_t: of('Kt_Nm_per_A'), k_e: of('Ke_Vs_per_rad'), N, eta, J_rotor: of('Jm_kgm2'), J_load: 0, b_rotor: of('viscous_b_Nms'), b_load: 0,
    k_s: null, d_s: null, tau_c: eta * N * of('coulomb_Nm'), encoder: 'output', bits: 14, i_lsb: 0.001,
  }
}

/** Steady current and output speed at nominal voltage against a torque at the output: two equations of the plant's own matrices. */
function steady(plant: Plant, torque: number): { i: number; omega: number } {
  const { n, A, B, E } = plantMatrices(plant, 25)
  const [a, b, c, d] = [A[0], A[1], A[n], A[n + 1]]
  const [x, y] = [-(B[0] * plant.V_nom + E[0] * torque), -(B[1] * plant.V_nom + E[1] * torque)]
  const det = a * d - b * c
  return { i: (x * d - b * y) / det, omega: (a * y - c * x) / det }
}

describe('gear motors: figures of the trade', () => {
  it.each(['A', 'B', 'C'].map((name) => entryOf(list, `motor.${name}`)))('$id', ({ inputs, expected, tolerance }) => {
    const plant = plantOf(inputs)
    const figures = expected as Record<string, number>
    const close = (value: number, name: string) => expect(Math.abs(value / figures[name] - 1), name).toBeLessThan(tolerance.rel ?? 1e-9)
    const free = steady(plant, plant.tau_c)
    const rpm = (free.omega * 60) / (2 * Math.PI)
    close(free.i, 'no_load_current_A')
    close(rpm, 'no_load_output_rpm')
    close(rpm * plant.N, 'no_load_motor_rpm')
    const { n, A, B, E } = plantMatrices(plant, 25)
    const stall = (-B[0] * plant.V_nom) / A[0]
    close(stall, 'stall_current_A')
    // Torque at the output for each ampere; the entry takes off the current that friction and drag need.
    close((A[n] / -E[1]) * (stall - free.i), 'stall_torque_output_Nm')
    close(-1 / A[0], 'electrical_tau_s')
    close(A[0] / (A[1] * A[n]), 'mechanical_tau_s')
    const node = {
      R: plant.R, R_wh: inputs.Rth_winding_housing_K_per_W as number, R_ha: inputs.Rth_housing_ambient_K_per_W as number, tau_w: inputs.thermal_tau_winding_s as number, tau_h: inputs.thermal_tau_housing_s as number, T_amb: 25,
    }
    const T_max = inputs.Tmax_winding_C as number
    const continuous = continuousCurrent(node, T_max)
    // The entry refers copper's 0.00393/K to 25 °C, the model to 20 °C as IEC 60028 does: the same loss at T_max otherwise.
    close(continuous * Math.sqrt((1 + 0.00393 * (T_max - 20)) / 1.01965 / (1 + 0.00393 * (T_max - 25))), 'continuous_current_A')
    const warm = steadyTemperature(node, continuous)
    expect(warm.kind === 'steady' && Math.abs(warm.celsius - T_max)).toBeLessThan(1e-6)
  })
})

describe('their current loops, rotor locked, tuned by the modulus optimum', () => {
  it.each(['A', 'B', 'C'].map((name) => entryOf(list, `motor.${name}.current_loop`)))('$id', ({ id, inputs, recomputed }) => {
    const motor = entryOf(list, id.replace('.current_loop', '')).inputs
    const { Kp, Ki } = inputs.PI as { Kp: number; Ki: number }
    const firmware: Firmware = {
      mode: 'current', f_c: inputs.fs as number, f_o: inputs.fs as number, W: 1, D: 1, K_pp: 0, K_ip: 0, K_pv: 0, K_iv: 0, K_pc: Kp, K_ic: Ki, omega_max: 1, I_max: 1, d_max: 1, supply_compensated: true,
    }
    const { loops } = analyse({ plant: { ...plantOf(motor), k_e: 0 }, firmware, environment: { V_bus: motor.V as number, T_winding: 25 } })
    const { gainUp, phase, M_s } = loops.current!
    // Our law adds its integrator first: backward Euler.
    const { GM, PM, w_gc, Ms } = (recomputed as { backward_euler: Record<string, number> }).backward_euler
    if (gainUp.kind !== 'margin' || phase.kind !== 'margin' || M_s.kind !== 'peak') throw new Error('the loop has margins')
    expect(Math.abs(gainUp.factor / GM - 1)).toBeLessThan(1e-6)
    expect(Math.abs(phase.phaseMarginDeg - PM)).toBeLessThan(1e-5)
    expect(Math.abs((2 * Math.PI * phase.hz) / w_gc - 1)).toBeLessThan(1e-6)
    // The entry's peak is the largest of a scan.
    expect(Math.abs(M_s.value / Ms - 1)).toBeLessThan(1e-4)
  })
})
