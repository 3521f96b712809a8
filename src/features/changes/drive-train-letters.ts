import type { DriveTrain } from '../../../shared/parameters/machine-set.ts'

export type Letter = keyof DriveTrain

export interface LetterLine {
  letter: Letter
  /** as formulas write it; `sub` below the line */
  symbol: string
  sub?: string
  words: string
  /** unit of the set, SI; null for a count or a word */
  unit: string | null
  /** may carry a low and a high bound */
  bounded: boolean
  needed: boolean
  choices?: readonly string[]
}

type Line = [letter: Letter, symbol: string, sub: string, words: string, unit: string | null, kind?: 'bounded' | 'needed' | 'both']

const groups: { title: string; lines: Line[] }[] = [
  {
    title: 'Motor and driver',
    lines: [
      ['V_nom', 'V', 'nom', 'nominal supply', 'V', 'needed'],
      ['V_bus', 'V', 'bus', 'supply as it stands', 'V', 'bounded'],
      ['R', 'R', '', 'winding resistance at 25 °C', 'Ω', 'both'],
      ['R_on', 'R', 'on', 'driver and leads', 'Ω', 'bounded'],
      ['L', 'L', '', 'winding inductance', 'H', 'both'],
      ['k_t', 'k', 't', 'torque constant', 'N·m/A', 'both'],
      ['k_e', 'k', 'e', 'back-EMF constant', 'V·s/rad', 'bounded'],
      ['T_winding', 'T', 'w', 'winding temperature', '°C', 'bounded'],
    ],
  },
  {
    title: 'Gear and load',
    lines: [
      ['N', 'N', '', 'motor revolutions per output revolution', null, 'needed'],
      ['eta', 'η', '', 'gear efficiency, driving', null, 'both'],
      ['J_rotor', 'J', 'rotor', 'rotor inertia', 'kg·m²', 'both'],
      ['J_load', 'J', 'load', 'load inertia at the output', 'kg·m²', 'both'],
      ['b_rotor', 'b', 'rotor', 'rotor drag', 'N·m·s/rad', 'bounded'],
      ['b_load', 'b', 'load', 'output drag', 'N·m·s/rad', 'bounded'],
      ['k_s', 'k', 's', 'torsional stiffness; rigid without', 'N·m/rad', 'bounded'],
      ['d_s', 'd', 's', 'torsional damping', 'N·m·s/rad', 'bounded'],
      ['backlash', 'β', '', 'backlash at the output', 'rad'],
      ['tau_c', 'τ', 'c', 'Coulomb friction at the output', 'N·m'],
      ['tau_s', 'τ', 's', 'breakaway friction at the output', 'N·m'],
      ['theta_stop_min', 'θ', 'min', 'lower hard stop', 'rad'],
      ['theta_stop_max', 'θ', 'max', 'upper hard stop', 'rad'],
    ],
  },
  {
    title: 'Sensors',
    lines: [
      ['encoder', 'side', '', 'side of the gear the encoder sits on', null, 'needed'],
      ['bits', 'bits', '', 'encoder resolution a turn', null, 'needed'],
      ['sensor_delay', 'age', '', 'age of the angle, current ticks', null],
      ['i_lsb', 'i', 'lsb', 'current sensor step', 'A', 'needed'],
    ],
  },
  {
    title: 'Ratings and heat',
    lines: [
      ['I_driver', 'I', 'driver', 'peak rating of the driver', 'A'],
      ['I_sense', 'I', 'sense', 'range of the current sensor', 'A'],
      ['I_demagnetisation', 'I', 'demag', 'current at which the magnets suffer', 'A'],
      ['tau_gear', 'τ', 'gear', 'gear rating at the output', 'N·m'],
      ['R_th', 'R', 'th', 'winding to ambient', 'K/W'],
      ['tau_th', 'τ', 'th', 'thermal time constant, housing', 's'],
      ['R_th_winding', 'R', 'th,w', 'winding to housing', 'K/W'],
      ['tau_th_winding', 'τ', 'th,w', 'winding time constant', 's'],
      ['T_max', 'T', 'max', 'highest winding temperature', '°C'],
      ['T_amb', 'T', 'amb', 'ambient temperature', '°C'],
      ['peak_duty', 't', 'peak', 'how long the peak current must last', 's'],
      ['C_bus', 'C', 'bus', 'capacitance of the supply', 'F'],
      ['V_bus_max', 'V', 'max', 'highest supply the driver bears', 'V'],
      ['source_resistance', 'R', 'source', 'source resistance of the supply', 'Ω'],
    ],
  },
  {
    title: 'What the check asks',
    lines: [
      ['settling_target', 't', 'settle', 'settling wanted of a step', 's'],
      ['step', 'step', '', 'step the check commands: rad, rad/s or A by mode', null],
    ],
  },
]

/** Every letter of a drive train, grouped as a data sheet groups them. */
export const letterGroups: readonly { title: string; lines: readonly LetterLine[] }[] = groups.map((g) => ({
  title: g.title,
  lines: g.lines.map(([letter, symbol, sub, words, unit, kind]) => ({
    letter,
    symbol,
    ...(sub ? { sub } : {}),
    words,
    unit,
    bounded: kind === 'bounded' || kind === 'both',
    needed: kind === 'needed' || kind === 'both',
    ...(letter === 'encoder' ? { choices: ['output', 'motor'] } : {}),
  })),
}))

export const letterLines: readonly LetterLine[] = letterGroups.flatMap((g) => g.lines)
export const lineOfLetter = (letter: string): LetterLine | undefined => letterLines.find((l) => l.letter === letter)

export type Part = 'value' | 'low' | 'high'
type Stored = DriveTrain[Letter]
export type Filled = Exclude<Stored, undefined>

const isBounded = (q: unknown): q is { value: number; low: number; high: number } => typeof q === 'object' && q !== null

/** One part of a stored quantity; undefined where it has none. */
export const partOf = (stored: Stored, part: Part): number | string | undefined => (isBounded(stored) ? stored[part] : part === 'value' ? stored : undefined)

/**
 * The stored quantity with one part set.
 *
 * A first bound makes the other one meet the value; a bound taken away takes both. A value alone moves within its bounds, and past them it takes the bound along.
 */
export function withPart(stored: Stored, part: Part, to: number | undefined): Filled | undefined {
  const value = partOf(stored, 'value')
  if (part === 'value') {
    if (to === undefined) return undefined
    return isBounded(stored) ? { value: to, low: Math.min(stored.low, to), high: Math.max(stored.high, to) } : to
  }
  if (typeof value !== 'number') return stored
  if (to === undefined) return value
  const held = isBounded(stored) ? stored : { value, low: value, high: value }
  return { ...held, [part]: to }
}

/** "8 %" both ways alike, or "−30 %, +60 %": bounds as a tolerance of the value; "" without bounds. */
export function toleranceOf(stored: Stored): { low: number; high: number } | null {
  if (!isBounded(stored) || stored.value === 0 || stored.low === stored.high) return null
  return { low: (stored.low / stored.value - 1) * 100, high: (stored.high / stored.value - 1) * 100 }
}
