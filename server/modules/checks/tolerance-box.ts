import type { ToleranceBound } from '../../../shared/contract/checks.ts'
import type { DriveTrain } from '../../../shared/parameters/machine-set.ts'
import { bounds, nominal, type Quantity } from '../../../shared/parameters/quantity.ts'
import { etaRange } from '../../control/parameters.ts'

/** Letters that a drive train may bound, with their units. The supply comes first: corners that differ in it alone are neighbours then (tolerance-points.ts). */
const letters = {
  V_bus: 'V', T_winding: '°C', k_t: 'N·m/A', J_load: 'kg·m²', R: 'Ω', L: 'H', R_on: 'Ω', J_rotor: 'kg·m²', b_rotor: 'N·m·s/rad', b_load: 'N·m·s/rad', k_s: 'N·m/rad', d_s: 'N·m·s/rad',
} as const satisfies Partial<Record<keyof DriveTrain, string>>

/**
 * The tolerance box of a drive train: its bounded quantities, and always the gear's efficiency from driving to back-driven.
 *
 * k_e moves with k_t, so its own bounds count only where k_t has none.
 *
 * @throws  NumericError when the efficiency is no efficiency
 * @source  control-model.md §1, §5
 */
export function toleranceBox(d: DriveTrain): ToleranceBound[] {
  const box: ToleranceBound[] = []
  const put = (name: string, unit: string, q: Quantity | undefined) => {
    const range = bounds(q)
    if (q !== undefined && range) box.push({ name, unit, nominal: nominal(q), low: range[0], high: range[1] })
  }
  const compliant = d.k_s !== undefined
  for (const [name, unit] of Object.entries(letters) as [keyof typeof letters, string][]) {
    if (name === 'd_s' && !compliant) continue
    put(name, unit, d[name])
  }
  if (!bounds(d.k_t)) put('k_e', 'V·s/rad', d.k_e)
  const eta = nominal(d.eta)
  const [low, high] = bounds(d.eta) ?? [eta, eta]
  const back = etaRange({ eta: low }).high
  if (Math.max(high, back) > low) box.push({ name: 'eta', unit: '', nominal: eta, low, high: Math.max(high, back) })
  return box
}
