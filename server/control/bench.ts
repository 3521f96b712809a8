import { analyse } from './analyse.ts'
import { frequencyResponses } from './frequency-response.ts'
import type { JointModel } from './model.ts'
import { closuresOf } from './monodromy.ts'
import { sampleJoint } from './sampled-joint.ts'
import { simulate } from './simulation/simulate.ts'
import { stabilityMap } from './stability-map.ts'
import { sweepTolerance } from './tolerance.ts'
import { verdict } from './verdict.ts'

/** One line of a performance report. */
export interface BenchResult {
  readonly name: string
  readonly median_s: number
  readonly min_s: number
  readonly max_s: number
  readonly runs: number
}

export interface BenchWork {
  readonly name: string
  /** Does the work `inner` times in a run, so that a run is long against the clock's step. */
  readonly inner: number
  readonly run: () => void
}

/** The joint that the figures are stated for: 15 kHz over 4 kHz, W = 16, D = 1, rigid, position mode. */
export const BASELINE: JointModel = {
  plant: { V_nom: 12, R: 16, R_on: 0.5, L: 0.0013, k_t: 0.007232, k_e: 0.007232, N: 250, eta: 0.28, J_rotor: 1.5e-8, J_load: 2e-4, b_rotor: 0, b_load: 0.001297, k_s: null, d_s: null, tau_c: 0.0121, encoder: 'output', bits: 14, i_lsb: 0.001 },
  firmware: { mode: 'position', f_c: 15000, f_o: 4000, W: 16, D: 1, K_pp: 31.4159, K_ip: 0, K_pv: 0.172209, K_iv: 6.49213, K_pc: 5.19402, K_ic: 103673, omega_max: 5.02655, I_max: 0.5, d_max: 0.95, supply_compensated: true },
  environment: { V_bus: 12, T_winding: 25 },
}

const { plant, firmware } = BASELINE

/** Eight bounds that all move the loop: 256 vertices, no two alike. */
export const BASELINE_BOX = {
  R: [plant.R * 0.88, plant.R * 1.12],
  L: [plant.L * 0.8, plant.L * 1.2],
  k_t: [plant.k_t * 0.9, plant.k_t * 1.1],
  J_load: [plant.J_load * 0.7, plant.J_load * 2],
  b_load: [plant.b_load * 0.5, plant.b_load * 2],
  eta: [plant.eta, 1],
  R_on: [0.3, 0.8],
  T_winding: [0, 105],
} as const

/** Report of one joint: ρ, eigenvalues, margins, bandwidths, 200 frequencies for each loop, one nonlinear step of 0.5 s. */
export function wholeReport(model: JointModel, t_end = 0.5): void {
  analyse(model)
  const loops = closuresOf(sampleJoint(model).closes)
  const highest = model.firmware.f_o / 2
  frequencyResponses(model, loops, Array.from({ length: 200 }, (_, k) => 0.1 * (highest / 0.1) ** (k / 199)))
  simulate(model, { profile: 'step', step_to: 0.5, theta_0: 0, t_end, encoder_quantised: true, current_quantised: true, tau_load: 0, backlash: 0 })
}

/** The core's own works; names as the performance report has them. */
export function controlWorks(): BenchWork[] {
  return [
    { name: 'verdict', inner: 100, run: () => void verdict(BASELINE) },
    { name: 'report', inner: 1, run: () => wholeReport(BASELINE) },
    { name: 'vertices-256', inner: 1, run: () => void sweepTolerance(BASELINE, BASELINE_BOX, { seed: 1, samples: 0, margins: false }) },
    { name: 'map-64', inner: 1, run: () => void stabilityMap(BASELINE, axis('K_pv', firmware.K_pv), axis('K_pp', firmware.K_pp), { margins: false }) },
  ]
}

function axis(parameter: string, about: number): { parameter: string; low: number; high: number; count: number } {
  return { parameter, low: about / 20, high: about * 20, count: 64 }
}

/**
 * Times one work: some runs to warm up, then `runs` timed ones.
 *
 * @param now  a clock in seconds that only grows; the core itself knows none
 */
export function timeWork(work: BenchWork, runs: number, now: () => number): BenchResult {
  const once = (): number => {
    const start = now()
    for (let k = 0; k < work.inner; k++) work.run()
    return (now() - start) / work.inner
  }
  for (let k = 0; k < 5; k++) once()
  const spent = Array.from({ length: runs }, once).sort((a, b) => a - b)
  return { name: work.name, median_s: spent[Math.floor(runs / 2)], min_s: spent[0], max_s: spent[runs - 1], runs }
}
