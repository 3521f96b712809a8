import { NumericError } from './errors.ts'
import { guardInteger, guardNumber, type ControlMode, type JointModel } from './model.ts'
import { parameterNamed, valueOf, type ParameterName } from './parameters.ts'
import { pointEvaluator, type PointEvaluator, type PointResult } from './point.ts'
import { latinHypercube } from './random.ts'
import { rankBySensitivity, type Sensitivity } from './sensitivity.ts'
import { sampleJoint } from './sampled-joint.ts'
import type { Verdict } from './stability.ts'
import { verdictOfSampled } from './verdict.ts'

/** Bounds of the tolerance box by parameter name, each [low, high]. */
export type ToleranceBox = Readonly<Record<string, readonly [number, number]>>

export interface ToleranceOptions {
  /** Of the Latin hypercube. */
  readonly seed: number
  /** Samples inside the box; by default 256, 1024 with more than ten bounds; 0: vertices alone. */
  readonly samples?: number
  /** Margins at every point too; about a hundred times the cost of ρ. */
  readonly margins: boolean
}

/** Bounds that all get their vertices; of more, the ten that matter most do. */
export const VERTEX_BOUNDS_LIMIT = 10
export const SAMPLES_LIMIT = 65_536
export const BOUNDS_LIMIT = 24

export type PointPlace = { readonly kind: 'vertex' | 'sample'; readonly index: number; readonly values: Readonly<Record<string, number>> }
export type Worst = { readonly kind: 'none' } | { readonly kind: 'worst'; readonly value: number; readonly at: PointPlace }

export interface LoopTolerance {
  /** Over the points at which the loop is stable by itself. */
  readonly phaseMarginDeg: Worst
  readonly gainMarginDb: Worst
  readonly delayMargin: Worst
  readonly unstableVertices: readonly number[]
  readonly unstableSamples: readonly number[]
}

export interface ToleranceCount {
  readonly points: number
  readonly stable: number
  readonly boundary: number
  readonly unstable: number
}

export interface ToleranceReport {
  /** All bounded parameters, in the box's order. */
  readonly names: readonly ParameterName[]
  /** Those whose low and high make the vertices: bit j of a vertex's index set means the high bound of the j-th. */
  readonly vertexNames: readonly ParameterName[]
  /** Why these, when not all; null when all. */
  readonly ranking: readonly Sensitivity[] | null
  readonly vertices: ToleranceCount
  readonly samples: ToleranceCount
  readonly worstRho: Worst
  readonly rhoOfVertices: Float64Array
  readonly rhoOfSamples: Float64Array
  readonly loops: Readonly<Partial<Record<ControlMode, LoopTolerance>>>
}

interface WorstSoFar {
  value: number
  index: number
}

interface LoopSoFar {
  phase: WorstSoFar
  gain: WorstSoFar
  delay: WorstSoFar
  unstable: number[]
}

/**
 * A tolerance sweep that is worked off in pieces, so that a worker can report progress and stop between them.
 *
 * @source control-model.md §5
 */
export class ToleranceSweep {
  readonly total: number
  readonly names: readonly ParameterName[]
  readonly vertexNames: readonly ParameterName[]
  private readonly evaluate: PointEvaluator
  private readonly start: { readonly re: number; readonly im: number }
  private readonly guess = { re: 1, im: 0 }
  private readonly low: Float64Array
  private readonly high: Float64Array
  private readonly nominal: Float64Array
  private readonly vertexBits: Int32Array
  private readonly vertexCount: number
  private readonly cube: Float64Array
  private readonly ranking: readonly Sensitivity[] | null
  private readonly rho: Float64Array
  private readonly verdicts: Verdict[] = []
  private readonly worst: WorstSoFar = { value: -Infinity, index: -1 }
  private readonly loops = new Map<ControlMode, LoopSoFar>()
  private readonly values: Float64Array

  /**
   * @throws NumericError bounds-crossed, not-finite, unknown-parameter (each names the bound), too-large
   */
  constructor(model: JointModel, box: ToleranceBox, options: ToleranceOptions) {
    this.names = Object.keys(box).map(parameterNamed)
    const n = this.names.length
    if (n > BOUNDS_LIMIT) throw new NumericError('too-large', { field: 'box', value: n, limit: BOUNDS_LIMIT, text: `${n} bounded values, at most ${BOUNDS_LIMIT} are swept; nothing was computed.` })
    if (this.names.includes('k_t') && this.names.includes('k_e')) {
      throw new NumericError('bad-input', { field: 'k_e', text: 'k_t and k_e move together: bound k_t alone. Nothing was computed.' })
    }
    this.low = new Float64Array(n)
    this.high = new Float64Array(n)
    this.nominal = Float64Array.from(this.names, (name) => valueOf(model, name))
    this.names.forEach((name, k) => {
      const bounds = box[name]
      guardNumber(`box.${name}[0]`, bounds?.[0], 'any')
      guardNumber(`box.${name}[1]`, bounds?.[1], 'any')
      if (bounds[0] > bounds[1]) {
        throw new NumericError('bounds-crossed', { field: name, value: bounds, text: `The bounds of ${name} are crossed: ${bounds[0]} to ${bounds[1]}. Nothing was computed. Swap or correct them.` })
      }
      this.low[k] = bounds[0]
      this.high[k] = bounds[1]
    })
    const samples = options.samples ?? (n > VERTEX_BOUNDS_LIMIT ? 1024 : 256)
    guardInteger('samples', samples, 0, SAMPLES_LIMIT)
    guardInteger('seed', options.seed, 0, 0xffffffff)
    this.evaluate = pointEvaluator(model, this.names, options.margins)
    const start = { re: 1, im: 0 }
    verdictOfSampled(sampleJoint(model), null, start)
    this.start = start
    this.ranking = n > VERTEX_BOUNDS_LIMIT ? rankBySensitivity(model, this.names, this.low, this.high, options.margins) : null
    const chosen = this.ranking ? new Set(this.ranking.slice(0, VERTEX_BOUNDS_LIMIT).map((s) => s.name)) : null
    const bits: number[] = []
    this.names.forEach((name, k) => {
      if (!chosen || chosen.has(name)) bits.push(k)
    })
    this.vertexBits = Int32Array.from(bits)
    this.vertexNames = bits.map((k) => this.names[k])
    this.vertexCount = 2 ** bits.length
    this.cube = latinHypercube(n === 0 ? 0 : samples, n, options.seed)
    this.total = this.vertexCount + (n === 0 ? 0 : samples)
    this.rho = new Float64Array(this.total)
    this.values = new Float64Array(n)
  }

  /** Points evaluated so far. */
  get done(): number {
    return this.verdicts.length
  }

  /** Evaluates up to `count` further points; true when none are left. */
  step(count: number): boolean {
    const end = Math.min(this.total, this.done + count)
    while (this.done < end) {
      const index = this.done
      this.valuesAt(index, this.values)
      // Every point starts from the nominal joint's root: its result does not depend on the order.
      this.guess.re = this.start.re
      this.guess.im = this.start.im
      this.take(index, this.evaluate(this.values, this.guess))
    }
    return this.done === this.total
  }

  /** Parameter values at a point: vertices first, then samples. */
  private valuesAt(index: number, out: Float64Array): void {
    if (index < this.vertexCount) {
      out.set(this.nominal)
      this.vertexBits.forEach((k, j) => {
        out[k] = Math.floor(index / 2 ** j) % 2 === 1 ? this.high[k] : this.low[k]
      })
      return
    }
    const n = this.names.length
    const row = (index - this.vertexCount) * n
    for (let k = 0; k < n; k++) out[k] = this.low[k] + this.cube[row + k] * (this.high[k] - this.low[k])
  }

  private take(index: number, point: PointResult): void {
    this.rho[index] = point.rho
    this.verdicts.push(point.verdict)
    if (point.rho > this.worst.value) {
      this.worst.value = point.rho
      this.worst.index = index
    }
    for (const [closure, loop] of Object.entries(point.loops) as [ControlMode, NonNullable<PointResult['loops'][ControlMode]>][]) {
      let so = this.loops.get(closure)
      if (!so) {
        const fresh = (): WorstSoFar => ({ value: Infinity, index: -1 })
        so = { phase: fresh(), gain: fresh(), delay: fresh(), unstable: [] }
        this.loops.set(closure, so)
      }
      if (loop.verdict !== 'stable') so.unstable.push(index)
      if (loop.phase.kind === 'margin') lower(so.phase, loop.phase.phaseMarginDeg, index)
      if (loop.gainUp.kind === 'margin') lower(so.gain, loop.gainUp.gainMarginDb, index)
      if (loop.delay.kind === 'margin') lower(so.delay, loop.delay.delay, index)
    }
  }

  /** What the evaluated points say; whole once `step` has returned true. */
  report(): ToleranceReport {
    const loops: Partial<Record<ControlMode, LoopTolerance>> = {}
    for (const [closure, so] of this.loops) {
      loops[closure] = {
        phaseMarginDeg: this.worstOf(so.phase),
        gainMarginDb: this.worstOf(so.gain),
        delayMargin: this.worstOf(so.delay),
        unstableVertices: so.unstable.filter((k) => k < this.vertexCount),
        unstableSamples: so.unstable.filter((k) => k >= this.vertexCount).map((k) => k - this.vertexCount),
      }
    }
    return {
      names: this.names,
      vertexNames: this.vertexNames,
      ranking: this.ranking,
      vertices: countVerdicts(this.verdicts.slice(0, this.vertexCount)),
      samples: countVerdicts(this.verdicts.slice(this.vertexCount)),
      worstRho: this.worstOf(this.worst),
      rhoOfVertices: this.rho.slice(0, Math.min(this.done, this.vertexCount)),
      rhoOfSamples: this.rho.slice(this.vertexCount, Math.max(this.done, this.vertexCount)),
      loops,
    }
  }

  private worstOf(so: WorstSoFar): Worst {
    if (so.index < 0) return { kind: 'none' }
    const out = new Float64Array(this.names.length)
    this.valuesAt(so.index, out)
    const vertex = so.index < this.vertexCount
    const values = Object.fromEntries(this.names.map((name, k) => [name, out[k]]))
    return { kind: 'worst', value: so.value, at: { kind: vertex ? 'vertex' : 'sample', index: vertex ? so.index : so.index - this.vertexCount, values } }
  }
}

/** The whole sweep at once. */
export function sweepTolerance(model: JointModel, box: ToleranceBox, options: ToleranceOptions): ToleranceReport {
  const sweep = new ToleranceSweep(model, box, options)
  sweep.step(sweep.total)
  return sweep.report()
}

function lower(so: WorstSoFar, value: number, index: number): void {
  if (value < so.value) {
    so.value = value
    so.index = index
  }
}

function countVerdicts(verdicts: readonly Verdict[]): ToleranceCount {
  const count = { points: verdicts.length, stable: 0, boundary: 0, unstable: 0 }
  for (const v of verdicts) count[v]++
  return count
}
