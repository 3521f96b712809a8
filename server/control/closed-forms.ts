import { eigenvalues, spectralRadius } from './eigenvalues.ts'
import type { Plant } from './model.ts'
import { resistanceAt } from './plant.ts'

/**
 * Largest K·k·T of an integrator under proportional control, delayed by D ticks: 2·sin(π/(4D + 2)).
 *
 * @source control-model.md §7; Levin and May, from memory
 */
export function integratorLimit(D: number): number {
  return 2 * Math.sin(Math.PI / (2 * (2 * D + 1)))
}

/** The same from the eigenvalues of the delayed loop, by bisection: the check on the formula, and of it. */
export function integratorLimitByEigenvalues(D: number): number {
  const n = D + 1
  const radius = (gain: number): number => {
    // y⁺ = y − gain·(y of D ticks ago).
    const Phi = new Float64Array(n * n)
    Phi[0] = 1
    Phi[n - 1] -= gain
    for (let k = 1; k < n; k++) Phi[k * n + k - 1] = 1
    const { re, im } = eigenvalues(Phi, n)
    return spectralRadius(re, im, n)
  }
  // At gain 0 the radius is exactly 1: start inside the stable range.
  let low = 0.1 / n
  let high = 3
  for (let step = 0; step < 60; step++) {
    const middle = 0.5 * (low + high)
    if (radius(middle) < 1) low = middle
    else high = middle
  }
  return 0.5 * (low + high)
}

/** Winding pole over one current tick, a = e^{−(R(T) + R_on)·T_c/L}. */
export function windingPole(plant: Plant, T_winding: number, T_c: number): number {
  return Math.exp((-(resistanceAt(plant.R, T_winding) + plant.R_on) * T_c) / plant.L)
}

/** The K_ic that cancels the winding's pole, of a given K_pc. */
export function cancellingIntegral(K_pc: number, a: number, T_c: number): number {
  return (K_pc * (1 / a - 1)) / T_c
}

/**
 * Largest K_pc of the locked-rotor current loop whose integrator cancels the winding's pole.
 *
 * @param gamma  supply factor on the request
 * @source control-model.md §7
 */
export function lockedRotorLimit(plant: Plant, T_winding: number, T_c: number, D: number, gamma: number): number {
  const a = windingPole(plant, T_winding, T_c)
  const R = resistanceAt(plant.R, T_winding) + plant.R_on
  return ((R * a) / (1 - a) / gamma) * integratorLimit(D)
}

/** Delay of the window's velocity estimate, s. */
export function windowDelay(W: number, T_o: number): number {
  return (W * T_o) / 2
}
