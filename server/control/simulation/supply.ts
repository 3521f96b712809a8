/** The bus voltage as the driver sees it, and what reaches the motor from a request. control-model.md §2, §6. */

export interface Supply {
  /** Open-circuit bus voltage and the voltage the gains were made for, V. */
  V_bus: number
  V_nom: number
  /** The firmware measures the supply and divides it out. */
  compensated: boolean
  /** Largest duty, 0 … 1. */
  d_max: number
  /** Ω; 0 for a stiff supply. */
  source_resistance: number
}

/**
 * Bus voltage at a tick, V: the open-circuit voltage less the drop of the current drawn.
 *
 * A bridge at duty d draws d·i. The drop is taken with the motor current of the tick and held until the next; what
 * would flow back is not credited (the bus does not rise).
 *
 * @param request  the request that takes effect now, V, before γ and clamp
 * @param i        motor current now, A
 */
export function busVoltage(supply: Supply, request: number, i: number): number {
  const { V_bus, V_nom, d_max, source_resistance } = supply
  if (source_resistance === 0) return V_bus
  if (!supply.compensated) {
    const duty = Math.max(-d_max, Math.min(d_max, request / V_nom))
    return Math.max(0, V_bus - source_resistance * Math.max(0, duty * i))
  }
  // Compensated, d = request/V: V = V_bus − R_s·request·i/V, unless the duty meets its limit first.
  const power = Math.max(0, request * i)
  const discriminant = V_bus * V_bus - 4 * source_resistance * power
  if (discriminant >= 0) {
    const V = (V_bus + Math.sqrt(discriminant)) / 2
    if (Math.abs(request) <= d_max * V) return V
  }
  return Math.max(0, V_bus - source_resistance * Math.max(0, d_max * Math.sign(request) * i))
}

/** Voltage applied from a request at the given bus voltage: γ and the clamp to ±d_max·V. */
export function appliedVoltage(supply: Supply, request: number, V: number): number {
  const limit = supply.d_max * V
  const wanted = supply.compensated ? request : (request * V) / supply.V_nom
  return wanted > limit ? limit : wanted < -limit ? -limit : wanted
}

/** Limit on the current law's request, V: d_max·V/γ. */
export function requestLimit(supply: Supply, V: number): number {
  return supply.compensated ? supply.d_max * V : supply.d_max * supply.V_nom
}
