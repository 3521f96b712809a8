import type { DriveTrain } from '../../../shared/parameters/machine-set.ts'
import type { Quantity } from '../../../shared/parameters/quantity.ts'

/** A member of the drive train as the pages show it: what it is, its unit (as stored: SI), and where absent values come from. */
export interface DriveTrainPart {
  letter: keyof DriveTrain
  name: string
  unit: string
  absent?: string
}

export interface DriveTrainGroup {
  name: string
  parts: readonly DriveTrainPart[]
}

const part = (letter: keyof DriveTrain, name: string, unit: string, absent?: string): DriveTrainPart => ({ letter, name, unit, absent })

/** Every member of the drive train once, in the order of the power's way: supply, motor, gear, load, sensor, driver, heat. */
export const driveTrainGroups: readonly DriveTrainGroup[] = [
  { name: 'supply', parts: [part('V_nom', 'nominal supply', 'V'), part('V_bus', 'supply as it stands', 'V', 'as nominal'), part('V_bus_max', 'highest supply', 'V'), part('C_bus', 'capacitance', 'F'), part('source_resistance', 'source resistance', 'Ω')] },
  {
    name: 'motor',
    parts: [
      part('R', 'winding resistance at 25 °C', 'Ω'),
      part('L', 'winding inductance', 'H'),
      part('k_t', 'torque constant', 'N·m/A'),
      part('k_e', 'back-EMF constant', 'V·s/rad', 'as the torque constant'),
      part('J_rotor', 'rotor inertia', 'kg·m²'),
      part('b_rotor', 'rotor drag', 'N·m·s/rad', '0'),
      part('I_demagnetisation', 'demagnetising current', 'A'),
    ],
  },
  {
    name: 'gear',
    parts: [
      part('N', 'reduction', ''),
      part('eta', 'efficiency, driving', ''),
      part('k_s', 'torsional stiffness', 'N·m/rad', 'rigid'),
      part('d_s', 'torsional damping', 'N·m·s/rad'),
      part('backlash', 'backlash at the output', 'rad', '0'),
      part('tau_gear', 'rating at the output', 'N·m'),
    ],
  },
  {
    name: 'load',
    parts: [
      part('J_load', 'inertia at the output', 'kg·m²'),
      part('b_load', 'drag at the output', 'N·m·s/rad', '0'),
      part('tau_c', 'Coulomb friction', 'N·m', '0'),
      part('tau_s', 'breakaway friction', 'N·m', 'as Coulomb friction'),
      part('theta_stop_min', 'lower hard stop', 'rad'),
      part('theta_stop_max', 'upper hard stop', 'rad'),
      part('settling_target', 'settling wanted', 's'),
      // rad, rad/s or A, by the joint's mode
      part('step', 'step of the check', ''),
    ],
  },
  { name: 'sensor', parts: [part('encoder', 'encoder sits at the', ''), part('bits', 'resolution', 'bits a turn'), part('sensor_delay', 'age of the angle', 'current ticks', '0'), part('i_lsb', 'current sensor step', 'A'), part('I_sense', 'current sensor range', 'A')] },
  { name: 'driver', parts: [part('R_on', 'driver and lead resistance', 'Ω', '0'), part('I_driver', 'peak rating', 'A'), part('peak_duty', 'peak must last', 's')] },
  {
    name: 'heat',
    parts: [
      part('T_winding', 'winding temperature', '°C', '25 °C'),
      part('T_amb', 'ambient', '°C', '25 °C'),
      part('T_max', 'highest winding temperature', '°C'),
      part('R_th', 'winding to ambient', 'K/W'),
      part('tau_th', 'housing time constant', 's'),
      part('R_th_winding', 'winding to housing', 'K/W'),
      part('tau_th_winding', 'winding time constant', 's'),
    ],
  },
]

const GREEK: Record<string, string> = { tau: 'τ', eta: 'η', theta: 'θ', rho: 'ρ', omega: 'ω' }

/** "tau_th_winding" as it is set: τ with the subscript "th winding". */
export function letterParts(letter: string): { base: string; subscript: string } {
  const [base, ...rest] = letter.split('_')
  return { base: GREEK[base] ?? base, subscript: rest.join(' ') }
}

export const isQuantity = (v: unknown): v is Quantity => typeof v === 'number' || (typeof v === 'object' && v !== null && 'low' in v)
