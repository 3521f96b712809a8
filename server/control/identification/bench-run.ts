/** A bench log made by the simulation, for trials and demonstration: what a logger on the board would have kept. */
import { encoderCount } from '../plant.ts'
import type { JointModel } from '../model.ts'
import { guardInteger, guardNumber } from '../model.ts'
import { seededRandom } from '../random.ts'
import { simulateEveryTick } from '../simulation/simulate.ts'
import type { SimulationOptions } from '../simulation/simulate.ts'
import type { BenchLog } from './bench-log.ts'

export interface BenchRunOptions {
  run: SimulationOptions
  /** Current ticks per row: 1 logs every tick. */
  every: number
  seed: number
  /** Standard deviation of the current's and the voltage's noise, A and V. */
  currentNoise: number
  voltageNoise: number
  /** Position as the encoder counts it. */
  countPosition: boolean
}

/** Position (true or counted), speed over one row (what a simple logger shows), current, mean voltage to the next row. */
export function benchRun(model: JointModel, options: BenchRunOptions): BenchLog {
  const { every } = options
  guardInteger('every', every, 1, 100_000)
  guardNumber('currentNoise', options.currentNoise, 'not-negative')
  guardNumber('voltageNoise', options.voltageNoise, 'not-negative')
  const { record } = simulateEveryTick(model, options.run)
  const rows = Math.floor((record.count - 1) / every)
  const normal = normalNumbers(options.seed)
  const count = options.countPosition ? encoderCount(model.plant) : 0
  const make = (): Float64Array => new Float64Array(rows)
  const log = { time: make(), set_point: make(), position: make(), speed: make(), current: make(), voltage: make() }
  for (let k = 0; k < rows; k++) {
    const tick = k * every
    log.time[k] = tick * record.T_c
    log.set_point[k] = record.reference[tick]
    const theta = record.theta[tick]
    log.position[k] = count > 0 ? Math.floor(theta / count) * count : theta
    log.speed[k] = record.omega[tick]
    log.current[k] = record.i[tick] + options.currentNoise * normal()
    let sum = 0
    for (let j = 0; j < every; j++) sum += record.v[tick + j]
    log.voltage[k] = sum / every + options.voltageNoise * normal()
  }
  return log
}

/** Normally distributed numbers from a seed (Box and Muller, from memory). */
function normalNumbers(seed: number): () => number {
  const random = seededRandom(seed)
  return () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random())
}
