/** The pull-up resistors that a bus can have. Source: UM10204 §7.1 and its tables of electrical characteristics; worked example in TI SLVA689. */

const modes = [
  { upTo: 100_000, name: 'Standard-mode', I_OL: 0.003, t_r: 1000e-9, C_b: 400e-12 },
  { upTo: 400_000, name: 'Fast-mode', I_OL: 0.003, t_r: 300e-9, C_b: 400e-12 },
  { upTo: 1_000_000, name: 'Fast-mode Plus', I_OL: 0.02, t_r: 120e-9, C_b: 550e-12 },
] as const

/** Time from 0.3·V_DD to 0.7·V_DD over an RC: ln(0.7/0.3). */
const RISE = 0.8473

export interface PullUpWindow {
  mode: string
  /** R_p(min) = (V_DD − V_OL)/I_OL and R_p(max) = t_r/(0.8473·C_b), Ω; low above high: no resistor serves */
  low: number
  high: number
  /** most capacitance of a line in the mode, F */
  mostCapacitance: number
  /** most capacitance that the smallest resistor still lifts in time, F */
  capacitanceForLow: number
}

/** Null above Fast-mode Plus, whose buses are driven otherwise. @param bus bit/s, V, F */
export function pullUpWindow({ bitRate, supply, capacitance }: { bitRate: number; supply: number; capacitance: number }): PullUpWindow | null {
  const mode = modes.find((m) => bitRate <= m.upTo)
  if (!mode) return null
  const V_OL = supply > 2 ? 0.4 : 0.2 * supply
  const low = (supply - V_OL) / mode.I_OL
  return { mode: mode.name, low, high: mode.t_r / (RISE * capacitance), mostCapacitance: mode.C_b, capacitanceForLow: mode.t_r / (RISE * low) }
}
