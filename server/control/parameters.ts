import { NumericError } from './errors.ts'
import { guardNumber, type JointModel, type Plant } from './model.ts'

const PLANT = ['V_nom', 'R', 'R_on', 'L', 'k_t', 'k_e', 'N', 'eta', 'J_rotor', 'J_load', 'b_rotor', 'b_load', 'k_s', 'd_s'] as const
const FIRMWARE = ['f_c', 'f_o', 'W', 'D', 'sensor_delay', 'outer_delay', 'K_pp', 'K_ip', 'K_pv', 'K_iv', 'K_pc', 'K_ic'] as const
const ENVIRONMENT = ['V_bus', 'T_winding'] as const

/** Values that a tolerance, a map's axis or a limit search may vary, by their own names. */
export type ParameterName = (typeof PLANT)[number] | (typeof FIRMWARE)[number] | (typeof ENVIRONMENT)[number]

const GROUP = new Map<string, 'plant' | 'firmware' | 'environment'>([
  ...PLANT.map((name) => [name, 'plant'] as const),
  ...FIRMWARE.map((name) => [name, 'firmware'] as const),
  ...ENVIRONMENT.map((name) => [name, 'environment'] as const),
])

/**
 * The name as a parameter.
 *
 * @throws NumericError unknown-parameter
 */
export function parameterNamed(name: string): ParameterName {
  if (!GROUP.has(name)) {
    throw new NumericError('unknown-parameter', { field: name, text: `"${name}" is no value that can be varied; nothing was computed. Use one of ${[...GROUP.keys()].join(', ')}.` })
  }
  return name as ParameterName
}

export function valueOf(model: JointModel, name: ParameterName): number {
  const group = model[GROUP.get(name) as 'plant'] as unknown as Record<string, number | null | undefined>
  const value = group[name]
  if (value === null || value === undefined) {
    if (name === 'sensor_delay' || name === 'outer_delay') return 0
    throw new NumericError('bad-input', { field: name, text: `${name} is not given for this joint, so it cannot be varied; nothing was computed.` })
  }
  return value
}

/**
 * The model with some values replaced; `k_e` moves with `k_t` in proportion, unless it is replaced itself.
 *
 * @source control-model.md §5
 */
export function withValues(model: JointModel, names: readonly ParameterName[], values: ArrayLike<number>): JointModel {
  const plant: Record<string, unknown> = { ...model.plant }
  const firmware: Record<string, unknown> = { ...model.firmware }
  const environment: Record<string, unknown> = { ...model.environment }
  names.forEach((name, k) => {
    guardNumber(name, values[k], 'any')
    const group = GROUP.get(name)
    const target = group === 'plant' ? plant : group === 'firmware' ? firmware : environment
    target[name] = values[k]
    if (name === 'k_t' && !names.includes('k_e')) plant['k_e'] = model.plant.k_e * (values[k] / model.plant.k_t)
  })
  return { plant, firmware, environment } as unknown as JointModel
}

/**
 * Range of the model's effective efficiency: driving to back-driven.
 *
 * With equal mesh loss η_b = 2 − 1/η (from memory); at η ≤ 0.5 the gear does not back-drive and the range ends at 1.
 *
 * @source control-model.md §1
 */
export function etaRange(plant: Pick<Plant, 'eta'>): { readonly low: number; readonly high: number; readonly backDrives: boolean } {
  guardNumber('plant.eta', plant.eta, 'positive')
  if (plant.eta > 1) throw new NumericError('out-of-range', { field: 'plant.eta', value: plant.eta, limit: 1, text: `plant.eta is ${plant.eta}; a gear's driving efficiency is at most 1. Nothing was computed. Correct the value.` })
  if (plant.eta <= 0.5) return { low: plant.eta, high: 1, backDrives: false }
  return { low: plant.eta, high: 1 / (2 - 1 / plant.eta), backDrives: true }
}
