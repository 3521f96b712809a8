/** A drive train's values from a bench log. */
import { guardNumber } from '../model.ts'
import { ALPHA_20 } from '../plant.ts'
import { checkLog } from './bench-log.ts'
import type { BenchLog } from './bench-log.ts'
import { fitElectrical, WORST_CONDITION } from './electrical.ts'
import type { Estimate } from './estimate.ts'
import { fitMotion, mechanicsOf } from './mechanical.ts'
import { speedOf, voltageOf } from './signals.ts'
import type { ResidualSeries } from './signals.ts'

/** What the log itself cannot tell. SI, °C. */
export interface Known {
  N: number
  eta: number
  /** Switches and wiring, Ω. */
  R_on: number
  /** Winding temperature during the run; 25 when absent. */
  T_winding?: number
  /** Torque constant, N·m/A; taken equal to the identified k_e when absent. */
  k_t?: number
  /** Bus voltage for a log with duty instead of voltage, V. */
  V_bus?: number
}

export interface IdentificationReport {
  /** Winding resistance at 25 °C. */
  R: Estimate
  k_e: Estimate
  L: Estimate
  /** Whole inertia and drag at the output: J_load + η·N²·J_rotor, b_load + η·N²·b_rotor. */
  J: Estimate
  b: Estimate
  tau_c: Estimate
  tau_load: Estimate
  /** Where the torque constant behind J, b and τ came from; null when there was none. */
  torqueConstant: 'given' | 'taken equal to k_e' | null
  electrical: { residual: ResidualSeries | null; residualUnit: 'A' | 'V'; condition: number; offset: number }
  mechanical: { residual: ResidualSeries | null; residualUnit: 'rad' | 'rad/s'; condition: number; movingTime: number }
  rows: number
  /** Hz. */
  rate: number
  repairs: string[]
}

/**
 * R, k_e, L, J, b and τ_c by least squares, with standard errors; each value that the run does not show is refused with
 * the run that would.
 *
 * Electrical: output error of the current (or static balance where the log is slower than the winding). Mechanical:
 * integrals of the motion over pieces of one direction. Standard errors allow for residuals that hang together within a piece.
 *
 * @throws    NumericError bad-input, not-finite, too-large, out-of-range (names the column or value)
 * @accuracy  known joints with seeded noise are recovered within four standard errors and 1 % (b 2 %, L 3 %): the errors cover
 *            noise, the rest is what sampled rows leave out (identify.test.ts)
 * @source    control-model.md §1; L. Ljung, System Identification, output-error models (from memory)
 */
export function identify(log: BenchLog, known: Known): IdentificationReport {
  guardNumber('known.N', known.N, 'positive')
  guardNumber('known.eta', known.eta, 'positive')
  guardNumber('known.R_on', known.R_on, 'not-negative')
  guardNumber('known.T_winding', known.T_winding ?? 25, 'any')
  if (known.k_t !== undefined) guardNumber('known.k_t', known.k_t, 'positive')
  if (known.V_bus !== undefined) guardNumber('known.V_bus', known.V_bus, 'positive')
  const checked = checkLog(log)
  const motion = fitMotion(checked, speedOf(checked))
  const perAmpere = motion.kind === 'fit' && motion.condition <= WORST_CONDITION ? motion.coefficients[0] : 0
  const electrical = fitElectrical(checked, speedOf(checked, perAmpere)?.omega ?? null, voltageOf(checked, known.V_bus))
  const k_e = scaled(electrical.E, 1 / known.N)
  const torqueConstant = known.k_t !== undefined ? 'given' : k_e.kind === 'estimate' ? 'taken equal to k_e' : null
  const mechanics = mechanicsOf(motion, torquePerAmpere(known, k_e))
  return {
    R: windingAt25(electrical.R, known),
    k_e,
    L: electrical.L,
    ...mechanics,
    torqueConstant,
    electrical: { residual: electrical.residual, residualUnit: electrical.residualUnit, condition: electrical.condition, offset: electrical.offset },
    mechanical:
      motion.kind === 'fit'
        ? { residual: motion.residual, residualUnit: motion.residualUnit, condition: motion.condition, movingTime: motion.movingTime }
        : { residual: null, residualUnit: 'rad', condition: Infinity, movingTime: motion.movingTime },
    rows: checked.log.time.length,
    rate: 1 / checked.dt,
    repairs: checked.repairs,
  }
}

function scaled(e: Estimate, factor: number): Estimate {
  return e.kind === 'estimate' ? { kind: 'estimate', value: e.value * factor, standardError: e.standardError * factor } : e
}

function torquePerAmpere({ N, eta, k_t }: Known, k_e: Estimate): { value: number; relativeError: number } | null {
  if (k_t !== undefined) return { value: eta * N * k_t, relativeError: 0 }
  if (k_e.kind !== 'estimate') return null
  return { value: eta * N * k_e.value, relativeError: k_e.standardError / k_e.value }
}

/** The circuit's resistance without the switches, brought from the run's winding temperature to 25 °C. */
function windingAt25(R: Estimate, known: Known): Estimate {
  if (R.kind !== 'estimate') return R
  const warm = (1 + ALPHA_20 * ((known.T_winding ?? 25) - 20)) / (1 + 5 * ALPHA_20)
  const value = (R.value - known.R_on) / warm
  if (!(value > 0)) {
    return {
      kind: 'refused',
      reason: `The circuit has ${R.value.toPrecision(4)} Ω in all, no more than R_on.`,
      remedy: 'Check R_on and the units of voltage and current.',
    }
  }
  return { kind: 'estimate', value, standardError: R.standardError / warm }
}
