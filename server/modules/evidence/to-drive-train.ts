/** Identified values as edits of a drive train. */
import type { IdentifiedLetter, IdentifiedValue } from '../../../shared/contract/evidence.ts'
import type { DriveTrain } from '../../../shared/parameters/machine-set.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import { nominal, type Quantity } from '../../../shared/parameters/quantity.ts'
import type { Estimate } from '../../control/identification/estimate.ts'
import type { IdentificationReport, Known } from '../../control/identification/identify.ts'
import { plantOf } from '../checks/joint-model.ts'

const units: Record<IdentifiedLetter, string> = { R: 'Ω', k_e: 'V·s/rad', L: 'H', J: 'kg·m²', b: 'N·m·s/rad', tau_c: 'N·m' }

/** What is known of the joint beside its log. */
export function knownOf(driveTrain: DriveTrain, T_winding: number): Known {
  const plant = plantOf(driveTrain)
  return {
    N: plant.N, eta: plant.eta, R_on: plant.R_on, T_winding, V_bus: driveTrain.V_bus === undefined ? driveTrain.V_nom : nominal(driveTrain.V_bus),
    // Without a k_e of its own the torque constant is the one value for both: then the log decides it.
    ...(driveTrain.k_e === undefined ? {} : { k_t: plant.k_t }),
  }
}

/** Digits down to a tenth of the standard error, six at most. */
function rounded(value: number, standardError: number): number {
  if (!(standardError > 0)) return Number(value.toPrecision(6))
  const digits = Math.floor(Math.log10(Math.abs(value))) - Math.floor(Math.log10(standardError / 10)) + 1
  return Number(value.toPrecision(Math.min(6, Math.max(2, digits))))
}

/** A new nominal value; bounds keep their ratio to it. */
function renewed(before: Quantity | undefined, value: number): Quantity {
  if (before === undefined || typeof before === 'number') return value
  const scale = (bound: number) => Number(((bound / before.value) * value).toPrecision(6))
  return before.value > 0 ? { value, low: Math.min(value, scale(before.low)), high: Math.max(value, scale(before.high)) } : { value, low: Math.min(value, before.low), high: Math.max(value, before.high) }
}

interface Target {
  letter: keyof DriveTrain
  /** value of that letter for an identified one */
  of: (identified: number) => number
  words: string
}

function targetOf(letter: IdentifiedLetter, driveTrain: DriveTrain): Target {
  const { N, eta, J_rotor, b_rotor } = plantOf(driveTrain)
  if (letter === 'J') return { letter: 'J_load', of: (J) => J - eta * N * N * J_rotor, words: 'J_load, what is left of J without the rotor' }
  if (letter === 'b') return { letter: 'b_load', of: (b) => b - eta * N * N * b_rotor, words: 'b_load, what is left of b without the rotor' }
  if (letter === 'k_e' && driveTrain.k_e === undefined) return { letter: 'k_t', of: (k) => k, words: 'k_t, which stands for k_e as well' }
  return { letter: letter as keyof DriveTrain, of: (v) => v, words: letter }
}

const reportOf = (report: IdentificationReport, letter: IdentifiedLetter): Estimate => report[letter]

/** What the drive train says of the identified quantity now. */
function modelled(letter: IdentifiedLetter, driveTrain: DriveTrain): number | null {
  const plant = plantOf(driveTrain)
  if (letter === 'J') return plant.J_load + plant.eta * plant.N * plant.N * plant.J_rotor
  if (letter === 'b') return plant.b_load + plant.eta * plant.N * plant.N * plant.b_rotor
  if (letter === 'tau_c') return driveTrain.tau_c ?? null
  return plant[letter]
}

/** Each identified value beside the drive train's own, with the edit that would take it over. */
export function identifiedValues(report: IdentificationReport, family: string, driveTrain: DriveTrain): IdentifiedValue[] {
  return (['R', 'k_e', 'L', 'J', 'b', 'tau_c'] as const).map((letter): IdentifiedValue => {
    const estimate = reportOf(report, letter)
    const target = targetOf(letter, driveTrain)
    const base = { letter, unit: units[letter], modelled: modelled(letter, driveTrain), editWords: target.words }
    if (estimate.kind === 'refused') return { ...base, value: null, standardError: null, reason: estimate.reason, remedy: estimate.remedy, edit: null, unusable: '' }
    const found = { ...base, value: estimate.value, standardError: estimate.standardError, reason: '', remedy: '' }
    const value = rounded(target.of(estimate.value), estimate.standardError)
    const least = letter === 'b' || letter === 'tau_c' ? 0 : Number.MIN_VALUE
    if (!(value >= least)) return { ...found, edit: null, unusable: `It would make ${target.letter} ${value}: the rotor alone accounts for more. Look at J_rotor, N and η first.` }
    const before = driveTrain[target.letter] as Quantity | undefined
    const to = letter === 'tau_c' ? value : renewed(before, value)
    return { ...found, edit: { pointer: toPointer(['families', family, 'driveTrain', target.letter]), from: before, to }, unusable: '' }
  })
}
