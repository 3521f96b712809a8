import type { LoopName, MapParameter } from '../../../shared/contract/checks.ts'

interface Letter {
  words: string
  /** where the axis of a map runs before the joint's own value is known; a few cells that any joint bears, SI */
  trial: [low: number, high: number]
  /** what it cannot pass */
  least?: number
  most?: number
  whole?: boolean
}

/** What the axes of a stability map may vary, in the words of the screens. The task rates are left out: between two sensible ones lie ratios that no board runs. */
export const letters: Partial<Record<MapParameter, Letter>> = {
  K_pp: { words: 'position gain', trial: [1, 2], least: 0 },
  K_ip: { words: 'position integral gain', trial: [0, 1], least: 0 },
  K_pv: { words: 'velocity gain', trial: [1, 2], least: 0 },
  K_iv: { words: 'velocity integral gain', trial: [0, 1], least: 0 },
  K_pc: { words: 'current gain', trial: [1, 2], least: 0 },
  K_ic: { words: 'current integral gain', trial: [0, 1], least: 0 },
  W: { words: 'velocity window', trial: [1, 2], least: 1, most: 64, whole: true },
  R: { words: 'winding resistance', trial: [0.5, 1] },
  L: { words: 'winding inductance', trial: [2e-4, 4e-4] },
  k_t: { words: 'torque constant', trial: [0.02, 0.03] },
  J_load: { words: 'load inertia', trial: [0.01, 0.02] },
  V_bus: { words: 'supply', trial: [20, 24] },
  T_winding: { words: 'winding temperature', trial: [20, 40], least: -40, most: 180 },
}

const boxNames: Record<string, string> = { V_bus: 'supply', T_winding: 'winding', eta: 'η', J_load: 'J load', J_rotor: 'J rotor', b_load: 'b load', b_rotor: 'b rotor', k_t: 'k_t', R_on: 'R on' }
/** A letter of the tolerance box, short, for the head of a column. */
export const boxName = (letter: string): string => boxNames[letter] ?? letter

/** Loops that a joint closes, from the outermost: what its figures hold. */
export const modeOf = (loops: Partial<Record<LoopName, unknown>>): LoopName => (loops.position ? 'position' : loops.velocity ? 'velocity' : 'current')

/** The two parameters that a map of a joint is first drawn over. */
export const usualAxes: Record<LoopName, [MapParameter, MapParameter]> = { position: ['K_pv', 'K_pp'], velocity: ['K_pv', 'K_iv'], current: ['K_pc', 'K_ic'] }

const loopOfLetter: Partial<Record<MapParameter, LoopName>> = { K_pp: 'position', K_ip: 'position', K_pv: 'velocity', K_iv: 'velocity', W: 'velocity' }
const depth: Record<LoopName, number> = { current: 0, velocity: 1, position: 2 }

/** Parameters that matter to a joint that closes its loops up to `mode`. */
export const axesOf = (mode: LoopName): MapParameter[] => (Object.keys(letters) as MapParameter[]).filter((p) => depth[loopOfLetter[p] ?? 'current'] <= depth[mode])

/** Cells along an axis. */
const CELLS = 32
const WIDE = 5

/** An axis around what stands and what is released: five times down and up for gains, half and double for the drive train. */
export function axisAround(parameter: MapParameter, values: readonly number[]): { parameter: MapParameter; low: number; high: number; count: number } {
  const { least, most = Infinity, whole = false } = letters[parameter] ?? {}
  const top = Math.max(...values)
  if (whole) {
    const high = Math.min(most, Math.max(8, 2 * Math.round(top)))
    return { parameter, low: least ?? 0, high, count: high - (least ?? 0) + 1 }
  }
  if (parameter === 'T_winding') return { parameter, low: Math.max(least ?? -40, Math.min(...values) - 60), high: Math.min(most, top + 100), count: CELLS }
  if (top <= 0) return { parameter, low: 0, high: 10, count: CELLS }
  const some = values.filter((v) => v > 0)
  const gain = parameter.startsWith('K_')
  // An integral gain of 0 stands on the axis only if it begins there.
  if (gain && values.some((v) => v <= 0)) return { parameter, low: 0, high: round(top * 3), count: CELLS }
  return { parameter, low: round(Math.min(...some) / (gain ? WIDE : 2)), high: round(Math.min(most, top * (gain ? WIDE : 2))), count: CELLS }
}

const round = (v: number) => Number(v.toPrecision(3))

/** A cell's value as it is put into the draft: four digits, whole where counted. */
export const pickedValue = (parameter: MapParameter, value: number, perSi: number): number => (letters[parameter]?.whole ? Math.round(value * perSi) : Number((value * perSi).toPrecision(4)))
