/** Gains to start from: a drive train, wanted bandwidths, published rules, every delay counted. */
import { NumericError } from '../errors.ts'
import { analyse } from '../analyse.ts'
import type { Firmware, JointModel } from '../model.ts'
import { guardNumber, validateJointModel } from '../model.ts'
import { resistanceAt, supplyFactor } from '../plant.ts'
import { crossoverPi, modulusOptimum, poleZeroCancellation, reactionCurve, simc, symmetricOptimum, ultimateGain } from './rules.ts'
import type { PiGains } from './rules.ts'

export type CurrentRule =
  | { rule: 'pole-zero cancellation'; phaseMarginDeg: number }
  | { rule: 'pole-zero cancellation'; crossoverHz: number }
  | { rule: 'modulus optimum' }
  | { rule: 'SIMC'; tau_c?: number }

export type VelocityRule =
  | { rule: 'crossover'; crossoverHz: number; phaseMarginDeg: number }
  | { rule: 'symmetric optimum'; a: number }
  | { rule: 'SIMC'; tau_c?: number }
  | { rule: 'reaction curve' }
  | { rule: 'ultimate gain' }

export type PositionRule = { rule: 'crossover'; crossoverHz: number } | { rule: 'modulus optimum' } | { rule: 'SIMC'; tau_c?: number }

export interface Wanted {
  current: CurrentRule
  velocity?: VelocityRule
  position?: PositionRule
}

export interface Step {
  loop: 'current' | 'velocity' | 'position'
  rule: string
  /** Delays the rule was given, s, by what they come from, and their sum. */
  delays: { [cause: string]: number }
  T_sigma: number
  gains: Partial<Firmware>
}

export interface StartingValues {
  gains: Pick<Firmware, 'K_pc' | 'K_ic' | 'K_pv' | 'K_iv' | 'K_pp' | 'K_ip'>
  steps: Step[]
}

/**
 * Gains of the loops that the mode closes, innermost first; those of the other loops are kept.
 *
 * Current: R', L with D ticks and half a period. Velocity: the whole inertia with the current loop's lag, half an outer
 * period of hold, half the window, and the two delays. Position: an integrator with the velocity loop's lag.
 *
 * @param model   plant and timing; the gains present are only kept where nothing is asked
 * @param wanted  one rule per closed loop
 * @returns       gains as real numbers (no register rounding) and how each came about
 * @throws        NumericError out-of-range with the admissible value, bad-input when a closed loop has no rule
 * @source        rules.ts names each rule's source; delays: control-model.md §2, §7
 */
export function startingValues(model: JointModel, wanted: Wanted): StartingValues {
  validateJointModel(model)
  const { firmware } = model
  const steps: Step[] = [currentStep(model, wanted.current)]
  let tuned = merge(model, steps[0].gains)
  if (firmware.mode !== 'current') {
    if (wanted.velocity === undefined) missing('velocity')
    steps.push(velocityStep(tuned, wanted.velocity as VelocityRule))
    tuned = merge(tuned, steps[1].gains)
  }
  if (firmware.mode === 'position') {
    if (wanted.position === undefined) missing('position')
    steps.push(positionStep(tuned, wanted.position as PositionRule))
    tuned = merge(tuned, steps[2].gains)
  }
  const { K_pc, K_ic, K_pv, K_iv, K_pp, K_ip } = tuned.firmware
  return { gains: { K_pc, K_ic, K_pv, K_iv, K_pp, K_ip }, steps }
}

function missing(loop: string): never {
  throw new NumericError('bad-input', { field: `wanted.${loop}`, text: `The ${loop} loop is closed in this mode and no rule was chosen for it; nothing was computed.` })
}

function merge(model: JointModel, gains: Partial<Firmware>): JointModel {
  return { ...model, firmware: { ...model.firmware, ...gains } }
}

function sum(delays: { [cause: string]: number }): number {
  return Object.values(delays).reduce((total, delay) => total + delay, 0)
}

function currentStep(model: JointModel, wanted: CurrentRule): Step {
  const { plant, firmware, environment } = model
  const T_c = 1 / firmware.f_c
  const R = resistanceAt(plant.R, environment.T_winding) + plant.R_on
  const supply = supplyFactor(plant, firmware, environment)
  const delays = { 'ticks of voltage delay': firmware.D * T_c, 'half a period of hold': T_c / 2 }
  const T_sigma = sum(delays)
  const lag = { gain: supply / R, large: plant.L / R }
  const gains = ((): PiGains => {
    switch (wanted.rule) {
      case 'pole-zero cancellation':
        return poleZeroCancellation({ R, L: plant.L, T: T_c, D: firmware.D, supply }, 'phaseMarginDeg' in wanted ? wanted : { crossoverHz: wanted.crossoverHz })
      case 'modulus optimum':
        return modulusOptimum({ ...lag, T_sigma })
      case 'SIMC':
        return simc({ ...lag, delay: T_sigma }, positiveOr(wanted.tau_c, T_sigma))
    }
  })()
  return { loop: 'current', rule: wanted.rule, delays, T_sigma, gains: { K_pc: gains.K_p, K_ic: gains.K_i } }
}

/** The current loop's lag as the outer loops see it: L over what its proportional gain adds. */
function currentLag({ plant, firmware, environment }: JointModel): number {
  return plant.L / (firmware.K_pc * supplyFactor(plant, firmware, environment))
}

function velocityStep(model: JointModel, wanted: VelocityRule): Step {
  const { plant, firmware } = model
  const [T_c, T_o] = [1 / firmware.f_c, 1 / firmware.f_o]
  const J = plant.J_load + plant.eta * plant.N ** 2 * plant.J_rotor
  const b = plant.b_load + plant.eta * plant.N ** 2 * plant.b_rotor
  const K = plant.eta * plant.N * plant.k_t
  const slope = K / J
  const delays = {
    'current loop': currentLag(model),
    'half an outer period of hold': T_o / 2,
    'half the velocity window': (firmware.W * T_o) / 2,
    'sensor and outer task': ((firmware.sensor_delay ?? 0) + (firmware.outer_delay ?? 0)) * T_c,
  }
  const T_sigma = sum(delays)
  const gains = ((): PiGains => {
    switch (wanted.rule) {
      case 'crossover':
        return crossoverPi({ slope, delay: T_sigma }, wanted)
      case 'symmetric optimum':
        return symmetricOptimum({ slope, T_sigma }, wanted.a)
      case 'SIMC':
        return simc(b > 0 ? { gain: K / b, large: J / b, delay: T_sigma } : { slope, delay: T_sigma }, positiveOr(wanted.tau_c, T_sigma))
      case 'reaction curve': {
        const { K_p, T_i } = reactionCurve(slope, T_sigma, 'PI')
        return { K_p, K_i: K_p / T_i }
      }
      case 'ultimate gain':
        return fromUltimateGain(model, 0.2 / (slope * T_sigma))
    }
  })()
  return { loop: 'velocity', rule: wanted.rule, delays, T_sigma, gains: { K_pv: gains.K_p, K_iv: gains.K_i } }
}

/** The exact sampled loop's own limit: gain margin and its frequency under a small proportional gain. */
function fromUltimateGain(model: JointModel, K_pv: number): PiGains {
  const trial: JointModel = merge(model, { K_pv, K_iv: 0, mode: 'velocity' })
  const margin = analyse(trial).loops.velocity?.gainUp
  if (margin?.kind !== 'margin') {
    throw new NumericError('no-convergence', { field: 'K_pv', text: 'The velocity loop shows no limit of gain to start from; nothing was computed. Choose another rule.' })
  }
  const { K_p, T_i } = ultimateGain(K_pv * margin.factor, 1 / margin.hz, 'PI')
  return { K_p, K_i: K_p / T_i }
}

function positionStep(model: JointModel, wanted: PositionRule): Step {
  const { plant, firmware } = model
  const [T_c, T_o] = [1 / firmware.f_c, 1 / firmware.f_o]
  const J = plant.J_load + plant.eta * plant.N ** 2 * plant.J_rotor
  const crossover = (plant.eta * plant.N * plant.k_t * firmware.K_pv) / J
  const delays = {
    'velocity loop': 1 / crossover,
    'half an outer period of hold': T_o / 2,
    'sensor and outer task': ((firmware.sensor_delay ?? 0) + (firmware.outer_delay ?? 0)) * T_c,
  }
  const T_sigma = sum(delays)
  const K_pp = ((): number => {
    switch (wanted.rule) {
      case 'crossover':
        guardNumber('crossoverHz', wanted.crossoverHz, 'positive')
        return 2 * Math.PI * wanted.crossoverHz
      case 'modulus optimum':
        return 1 / (2 * T_sigma)
      case 'SIMC':
        return simc({ slope: 1, delay: T_sigma }, positiveOr(wanted.tau_c, T_sigma)).K_p
    }
  })()
  return { loop: 'position', rule: wanted.rule, delays, T_sigma, gains: { K_pp, K_ip: 0 } }
}

function positiveOr(value: number | undefined, fallback: number): number {
  if (value === undefined) return fallback
  guardNumber('tau_c', value, 'positive')
  return value
}
