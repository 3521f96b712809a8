import { NumericError } from './errors.ts'

/**
 * Drive train and sensors, SI, in the letters of control-model.md §1.
 * `R` is given at 25 °C; `k_s` and `d_s` null: rigid.
 */
export interface Plant {
  /** Supply voltage for which the firmware's duty is scaled. */
  readonly V_nom: number
  readonly R: number
  readonly R_on: number
  readonly L: number
  readonly k_t: number
  readonly k_e: number
  readonly N: number
  /** Gear efficiency, driving; above 1 it stands for a back-driven gear (§1). */
  readonly eta: number
  readonly J_rotor: number
  readonly J_load: number
  readonly b_rotor: number
  readonly b_load: number
  readonly k_s: number | null
  readonly d_s: number | null
  /** Coulomb friction at the output; the linear analyses drop it. */
  readonly tau_c: number
  /** Break-away torque, by default `tau_c`. */
  readonly tau_s?: number
  readonly encoder: 'output' | 'motor'
  readonly bits: number
  /** Step of the current sensor, A. */
  readonly i_lsb: number
}

export type ControlMode = 'position' | 'velocity' | 'current'

/** Gains, limits and timing of the cascade, control-model.md §2. */
export interface Firmware {
  readonly mode: ControlMode
  readonly f_c: number
  readonly f_o: number
  /** Samples over which the velocity estimate is averaged. */
  readonly W: number
  /** Current ticks between a voltage request and its application. */
  readonly D: number
  /** The outer task sees θ as the current task sampled it at its last tick but (`sensor_delay` − 1); 0: θ now. */
  readonly sensor_delay?: number
  /** Current ticks between the computing of `i_ref` and its effect. */
  readonly outer_delay?: number
  readonly K_pp: number
  readonly K_ip: number
  readonly K_pv: number
  readonly K_iv: number
  readonly K_pc: number
  readonly K_ic: number
  readonly omega_max: number
  readonly I_max: number
  /** Largest duty, 0 to 1. */
  readonly d_max: number
  readonly supply_compensated: boolean
}

export interface Environment {
  readonly V_bus: number
  /** Winding temperature, °C. */
  readonly T_winding: number
}

export interface JointModel {
  readonly plant: Plant
  readonly firmware: Firmware
  readonly environment: Environment
}

/** Largest window; the cost of a verdict grows with it. */
export const W_LIMIT = 256
/** Largest `sensor_delay` and `outer_delay`, current ticks. */
export const DELAY_LIMIT = 64
/** Copper at this temperature and below would have no resistance by the linear law. */
const T_LOWEST = 20 - 1 / 0.00393

/** No joint's value is larger than this, nor, unless it is 0, smaller than its inverse; what is would overflow on its way. A limit that is not there is larger. */
const SIZE_LIMIT = 1e30

type Rule = 'positive' | 'not-negative' | 'any'

/** Names are put together once: a sweep guards every point. */
const named = <K extends string>(part: string, rules: readonly (readonly [K, Rule])[]) => rules.map(([field, rule]) => ({ field, name: `${part}.${field}`, rule }))

const PLANT_RULES = named<keyof Plant>('plant', [
  ['V_nom', 'positive'], ['R', 'positive'], ['R_on', 'not-negative'], ['L', 'positive'], ['k_t', 'positive'],
  ['k_e', 'not-negative'], ['N', 'positive'], ['eta', 'positive'], ['J_rotor', 'not-negative'], ['J_load', 'not-negative'],
  ['b_rotor', 'not-negative'], ['b_load', 'not-negative'], ['tau_c', 'not-negative'], ['i_lsb', 'not-negative'],
])
const FIRMWARE_RULES = named<keyof Firmware>('firmware', [
  ['f_c', 'positive'], ['f_o', 'positive'], ['K_pp', 'any'], ['K_ip', 'any'], ['K_pv', 'any'], ['K_iv', 'any'],
  ['K_pc', 'any'], ['K_ic', 'any'], ['omega_max', 'positive'], ['I_max', 'positive'], ['d_max', 'positive'],
])

/**
 * Guards every value of a joint before any arithmetic touches it.
 *
 * @throws NumericError not-finite, out-of-range or bad-input, naming the field
 */
export function validateJointModel(model: JointModel): void {
  const { plant, firmware, environment } = model
  if (!plant || !firmware || !environment) {
    throw new NumericError('bad-input', { text: 'A joint needs plant, firmware and environment; nothing was computed.' })
  }
  for (const { field, name, rule } of PLANT_RULES) guardSized(name, plant[field], rule, SIZE_LIMIT)
  for (const { field, name, rule } of FIRMWARE_RULES) guardSized(name, firmware[field], rule, field === 'omega_max' || field === 'I_max' ? Infinity : SIZE_LIMIT)
  guardSized('environment.V_bus', environment.V_bus, 'positive', SIZE_LIMIT)
  guardNumber('environment.T_winding', environment.T_winding, 'any')
  if (environment.T_winding <= T_LOWEST || environment.T_winding > 1000) {
    outOfRange('environment.T_winding', environment.T_winding, `above ${T_LOWEST.toFixed(2)} °C and at most 1000 °C`)
  }
  guardDriveTrain(plant)
  if (plant.tau_s !== undefined) {
    guardNumber('plant.tau_s', plant.tau_s, 'not-negative')
    if (plant.tau_s < plant.tau_c) outOfRange('plant.tau_s', plant.tau_s, 'at least tau_c')
  }
  if (plant.encoder !== 'output' && plant.encoder !== 'motor') outOfRange('plant.encoder', plant.encoder, '"output" or "motor"')
  guardInteger('plant.bits', plant.bits, 1, 32)
  if (firmware.mode !== 'position' && firmware.mode !== 'velocity' && firmware.mode !== 'current') {
    outOfRange('firmware.mode', firmware.mode, '"position", "velocity" or "current"')
  }
  guardInteger('firmware.W', firmware.W, 1, W_LIMIT)
  guardInteger('firmware.D', firmware.D, 0, 2)
  guardInteger('firmware.sensor_delay', firmware.sensor_delay ?? 0, 0, DELAY_LIMIT)
  guardInteger('firmware.outer_delay', firmware.outer_delay ?? 0, 0, DELAY_LIMIT)
  if (firmware.d_max > 1) outOfRange('firmware.d_max', firmware.d_max, 'at most 1')
  if (typeof firmware.supply_compensated !== 'boolean') {
    outOfRange('firmware.supply_compensated', firmware.supply_compensated, 'true or false')
  }
}

function guardDriveTrain(plant: Plant): void {
  if ((plant.k_s === null) !== (plant.d_s === null)) {
    throw new NumericError('bad-input', {
      field: plant.k_s === null ? 'plant.k_s' : 'plant.d_s',
      text: 'A compliant drive train needs both k_s and d_s, a rigid one neither; nothing was computed. Give the missing value or clear both.',
    })
  }
  if (plant.k_s === null) {
    if (!(plant.J_load + plant.J_rotor > 0)) outOfRange('plant.J_load', plant.J_load, 'above 0 where J_rotor is 0')
    return
  }
  guardSized('plant.k_s', plant.k_s, 'positive', SIZE_LIMIT)
  guardSized('plant.d_s', plant.d_s, 'not-negative', SIZE_LIMIT)
  guardNumber('plant.J_rotor', plant.J_rotor, 'positive')
  guardNumber('plant.J_load', plant.J_load, 'positive')
}

/** A finite number that keeps its rule, or an error that names the field. */
export function guardNumber(field: string, value: unknown, rule: Rule): void {
  if (typeof value !== 'number' || !Number.isFinite(value)) {
    throw new NumericError('not-finite', { field, value, text: `${field} must be a finite number, not ${String(value)}; nothing was computed. Correct the value.` })
  }
  if (rule === 'positive' && value <= 0) outOfRange(field, value, 'above 0')
  if (rule === 'not-negative' && value < 0) outOfRange(field, value, 'at least 0')
}

function guardSized(field: string, value: unknown, rule: Rule, most: number): void {
  guardNumber(field, value, rule)
  const size = Math.abs(value as number)
  if (size !== 0 && (size < 1 / SIZE_LIMIT || size > most)) outOfRange(field, value, `0 or of a joint's size, ${1 / SIZE_LIMIT} to ${SIZE_LIMIT} SI; check its unit`)
}

/** An integer within [low, high], or an error that names the field. */
export function guardInteger(field: string, value: unknown, low: number, high: number): void {
  guardNumber(field, value, 'any')
  if (!Number.isInteger(value) || (value as number) < low || (value as number) > high) {
    outOfRange(field, value, `a whole number from ${low} to ${high}`)
  }
}

function outOfRange(field: string, value: unknown, need: string): never {
  throw new NumericError('out-of-range', { field, value, text: `${field} is ${String(value)}; it must be ${need}. Nothing was computed. Correct the value.` })
}
