import type { Plant } from '../model.ts'
import type { Structure } from './structure.ts'

export interface DriveOptions {
  plant: Plant
  /** Winding temperature, °C. */
  T_winding: number
  theta_0: number
  /** N·m at the output, opposing positive motion. */
  tau_load: number
  /** Friction moving and at rest, N·m. */
  tau_c: number
  tau_s: number
  /** Whole gap between the teeth, rad; 0 when there is none. */
  backlash: number
  /** Length of one unit of `advance`, s. */
  unit: number
}

/** A linear function of the state that is ≥ 0 while its mode lasts, and its rate for that mode. */
export interface Guard {
  row: Float64Array
  constant: number
  rateRow: Float64Array
  rateV: number
  rateConstant: number
  crossed: 'friction' | 'contact'
  /** The mode entered: sliding direction to try, or contact side. */
  next: number
}

export interface Mode {
  system: Structure
  /** Held torque and spring offset of this mode. */
  tau: number
  offset: number
  guards: Guard[]
  /** By interval length in units: Ad, the column of v, the constant part. */
  Ad: (Float64Array | undefined)[]
  bv: (Float64Array | undefined)[]
  b0: (Float64Array | undefined)[]
}
