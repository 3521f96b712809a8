import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import type { ParameterSchema } from '../../shared/registers/parameter-schema.ts'
import type { BenchLog } from '../control/identification/bench-log.ts'
import { benchRun } from '../control/identification/bench-run.ts'
import type { JointModel } from '../control/model.ts'
import { modelOfJoint } from '../modules/checks/joint-model.ts'
import { resolveJoint } from '../modules/checks/resolve-joint.ts'

export interface BenchRun {
  joint: string
  /** set-point in the mode's own unit from each instant on, s */
  times: number[]
  values: number[]
  seconds: number
  /** current ticks per row */
  every: number
  seed: number
  /** how the joint on the bench differs from its model: factors on its letters */
  really: Partial<Record<'R' | 'L' | 'k' | 'J_load' | 'b_load' | 'tau_c', number>>
  tau_load?: number
}

/** The joint as its registers have it, with the bench's own values in place of the model's. */
function joined(set: MachineSet, schemas: ReadonlyMap<string, ParameterSchema>, { joint, really }: BenchRun): JointModel {
  const resolved = resolveJoint(set, joint, schemas, 0)
  if (resolved.kind === 'refused') throw new Error(resolved.problems.map((p) => p.detail).join('\n'))
  const made = modelOfJoint(resolved.schema, resolved.encoded.decoded, set.families[set.joints[joint].family].driveTrain)
  if (made.kind === 'missing') throw new Error(`no model of ${joint}`)
  const { plant } = made.model
  const { R = 1, L = 1, k = 1, J_load = 1, b_load = 1, tau_c = 1 } = really
  return { ...made.model, plant: { ...plant, R: plant.R * R, L: plant.L * L, k_t: plant.k_t * k, k_e: plant.k_e * k, J_load: plant.J_load * J_load, b_load: plant.b_load * b_load, tau_c: plant.tau_c * tau_c } }
}

/** What a logger on the bench would have kept. */
export function benchLogOfRun(set: MachineSet, schemas: ReadonlyMap<string, ParameterSchema>, run: BenchRun): { log: BenchLog; model: JointModel } {
  const model = joined(set, schemas, run)
  const log = benchRun(model, {
    run: { profile: 'samples', times: run.times, values: run.values, theta_0: 0, t_end: run.seconds, encoder_quantised: true, current_quantised: true, tau_load: run.tau_load ?? 0, backlash: 0 },
    every: run.every, seed: run.seed, currentNoise: model.plant.i_lsb / 2, voltageNoise: 0.01, countPosition: true,
  })
  return { log, model }
}

export interface LogColumn {
  head: string
  of: 'time' | 'set_point' | 'position' | 'speed' | 'current' | 'voltage'
  /** of the column's unit in SI */
  unit: number
  decimals: number
}

/** A log as CSV text. */
export function csvOf(log: BenchLog, columns: readonly LogColumn[], { delimiter = ',', decimal = '.' } = {}): string {
  const lines = [columns.map((c) => c.head).join(delimiter)]
  for (let k = 0; k < log.time.length; k++) lines.push(columns.map((c) => ((log[c.of]?.[k] ?? 0) / c.unit).toFixed(c.decimals).replace('.', decimal)).join(delimiter))
  return `${lines.join('\n')}\n`
}

const degree = Math.PI / 180
/** Columns of a joint in position mode, as the bench of the walker writes them. */
export const positionColumns: readonly LogColumn[] = [
  { head: 'time [ms]', of: 'time', unit: 1e-3, decimals: 4 },
  { head: 'set-point [deg]', of: 'set_point', unit: degree, decimals: 3 },
  { head: 'position [deg]', of: 'position', unit: degree, decimals: 4 },
  { head: 'speed [rpm]', of: 'speed', unit: Math.PI / 30, decimals: 3 },
  { head: 'current [mA]', of: 'current', unit: 1e-3, decimals: 1 },
  { head: 'voltage [V]', of: 'voltage', unit: 1, decimals: 3 },
]
/** Columns of a joint in velocity mode. */
export const velocityColumns: readonly LogColumn[] = [
  { head: 't (s)', of: 'time', unit: 1, decimals: 6 },
  { head: 'set-point (rad/s)', of: 'set_point', unit: 1, decimals: 4 },
  { head: 'angle (rad)', of: 'position', unit: 1, decimals: 6 },
  { head: 'current (A)', of: 'current', unit: 1, decimals: 4 },
  { head: 'voltage (V)', of: 'voltage', unit: 1, decimals: 3 },
]
