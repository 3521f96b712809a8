import { NumericError } from './errors.ts'
import { guardInteger, guardNumber, type JointModel } from './model.ts'
import { parameterNamed, valueOf, type ParameterName } from './parameters.ts'
import { pointEvaluator, type PointEvaluator, type PointResult } from './point.ts'

/** Cells of the largest map. */
export const CELLS_LIMIT = 65_536
/** Bounds further apart than this are spaced in equal ratios. */
export const LOG_RATIO = 20

export type MapAxis =
  | { readonly parameter: string; readonly low: number; readonly high: number; readonly count: number }
  | { readonly parameter: string; readonly values: readonly number[] }

/** Smallest margin of a cell over its loops. */
export type CellMargin =
  | { readonly kind: 'unstable' }
  /** No loop has a margin within the search's limits. */
  | { readonly kind: 'none' }
  | { readonly kind: 'margin'; readonly value: number }

/** Codes of `MapReport.verdicts`. */
export const MAP_VERDICTS = ['stable', 'boundary', 'unstable'] as const

export interface MapReport {
  readonly xParameter: ParameterName
  readonly yParameter: ParameterName
  readonly x: Float64Array
  readonly y: Float64Array
  /** Rows of constant y from the first to the last, each along x. */
  readonly rho: Float64Array
  /** Indices into MAP_VERDICTS. */
  readonly verdicts: Uint8Array
  /** Null where margins were not asked for. */
  readonly phaseMarginDeg: readonly CellMargin[] | null
  readonly gainMarginDb: readonly CellMargin[] | null
}

export interface MapOptions {
  /** Margins of every cell too; about a hundred times the cost of ρ. */
  readonly margins: boolean
  /** Rows [from, to) alone, for several workers; `joinMaps` puts them together. */
  readonly rows?: readonly [number, number]
}

/**
 * A grid over two parameters, worked off in pieces. Each row by itself gives the same figures as in the whole.
 *
 * @source control-model.md §5
 */
export class StabilityMap {
  readonly total: number
  readonly x: Float64Array
  readonly y: Float64Array
  private readonly names: readonly [ParameterName, ParameterName]
  private readonly evaluate: PointEvaluator
  private readonly guess = { re: 1, im: 0 }
  private readonly firstRow: number
  private readonly margins: boolean
  private readonly rho: Float64Array
  private readonly verdicts: Uint8Array
  private readonly phase: CellMargin[] = []
  private readonly gain: CellMargin[] = []
  private count = 0

  /** @throws NumericError bounds-crossed, not-finite, unknown-parameter, too-large, bad-input */
  constructor(model: JointModel, x: MapAxis, y: MapAxis, options: MapOptions) {
    this.margins = options.margins
    this.names = [parameterNamed(x.parameter), parameterNamed(y.parameter)]
    if (this.names[0] === this.names[1]) throw new NumericError('bad-input', { field: 'y', value: y.parameter, text: `Both axes are ${y.parameter}; a map needs two parameters. Nothing was computed.` })
    for (const name of this.names) valueOf(model, name)
    this.x = axisValues('x', x)
    this.y = axisValues('y', y)
    const cells = this.x.length * this.y.length
    if (cells > CELLS_LIMIT) throw new NumericError('too-large', { field: 'map', value: cells, limit: CELLS_LIMIT, text: `The map has ${cells} cells, at most ${CELLS_LIMIT} are computed; nothing was computed. Ask for a coarser grid.` })
    const [from, to] = options.rows ?? [0, this.y.length]
    guardInteger('rows[0]', from, 0, this.y.length - 1)
    guardInteger('rows[1]', to, from + 1, this.y.length)
    this.firstRow = from
    this.total = (to - from) * this.x.length
    this.evaluate = pointEvaluator(model, this.names, options.margins)
    this.rho = new Float64Array(this.total)
    this.verdicts = new Uint8Array(this.total)
  }

  get done(): number {
    return this.count
  }

  /** Evaluates up to `count` further cells; true when none are left. */
  step(count: number): boolean {
    const end = Math.min(this.total, this.count + count)
    const width = this.x.length
    for (; this.count < end; this.count++) {
      const column = this.count % width
      if (column === 0) {
        this.guess.re = 1
        this.guess.im = 0
      }
      const values = [this.x[column], this.y[this.firstRow + Math.floor(this.count / width)]]
      const point = this.evaluate(values, this.guess)
      this.rho[this.count] = point.rho
      this.verdicts[this.count] = MAP_VERDICTS.indexOf(point.verdict)
      if (this.margins) {
        this.phase.push(smallest(point, (loop) => (loop.phase.kind === 'margin' ? loop.phase.phaseMarginDeg : null)))
        this.gain.push(smallest(point, (loop) => (loop.gainUp.kind === 'margin' ? loop.gainUp.gainMarginDb : null)))
      }
    }
    return this.count === this.total
  }

  report(): MapReport {
    return {
      xParameter: this.names[0],
      yParameter: this.names[1],
      x: this.x,
      y: this.y.slice(this.firstRow, this.firstRow + this.total / this.x.length),
      rho: this.rho,
      verdicts: this.verdicts,
      phaseMarginDeg: this.margins ? this.phase : null,
      gainMarginDb: this.margins ? this.gain : null,
    }
  }
}

/** The whole map at once. */
export function stabilityMap(model: JointModel, x: MapAxis, y: MapAxis, options: MapOptions): MapReport {
  const map = new StabilityMap(model, x, y, options)
  map.step(map.total)
  return map.report()
}

/** Reports of consecutive rows, in order, as one. */
export function joinMaps(parts: readonly MapReport[]): MapReport {
  if (parts.length === 0) throw new NumericError('bad-input', { field: 'parts', text: 'No parts of a map to join.' })
  const rows = (read: (part: MapReport) => Float64Array): Float64Array => Float64Array.from(parts.flatMap((part) => [...read(part)]))
  const cells = (read: (part: MapReport) => readonly CellMargin[] | null): readonly CellMargin[] | null =>
    parts.every((part) => read(part) !== null) ? parts.flatMap((part) => read(part) ?? []) : null
  return {
    ...parts[0],
    y: rows((part) => part.y),
    rho: rows((part) => part.rho),
    verdicts: Uint8Array.from(parts.flatMap((part) => [...part.verdicts])),
    phaseMarginDeg: cells((part) => part.phaseMarginDeg),
    gainMarginDb: cells((part) => part.gainMarginDb),
  }
}

/** Axis values: given, or between two bounds in equal steps, in equal ratios where high/low exceeds 20. */
export function axisValues(field: string, axis: MapAxis): Float64Array {
  if ('values' in axis) {
    if (axis.values.length === 0) throw new NumericError('bad-input', { field, text: `The ${field} axis has no values; nothing was computed.` })
    axis.values.forEach((value, k) => guardNumber(`${field}.values[${k}]`, value, 'any'))
    return Float64Array.from(axis.values)
  }
  const { low, high, count } = axis
  guardNumber(`${field}.low`, low, 'any')
  guardNumber(`${field}.high`, high, 'any')
  guardInteger(`${field}.count`, count, 2, CELLS_LIMIT)
  if (low >= high) throw new NumericError('bounds-crossed', { field, value: [low, high], text: `The ${field} axis runs from ${low} to ${high}; its low end must be below its high end. Nothing was computed.` })
  const ratios = low > 0 && high / low > LOG_RATIO
  return Float64Array.from({ length: count }, (_, k) => {
    if (k === 0) return low
    if (k === count - 1) return high
    const t = k / (count - 1)
    return ratios ? low * (high / low) ** t : low + t * (high - low)
  })
}

type LoopPoint = NonNullable<PointResult['loops']['current']>

function smallest(point: PointResult, read: (loop: LoopPoint) => number | null): CellMargin {
  const loops = Object.values(point.loops)
  if (point.verdict !== 'stable' || loops.some((loop) => loop.verdict !== 'stable')) return { kind: 'unstable' }
  const values = loops.map(read).filter((v) => v !== null)
  return values.length === 0 ? { kind: 'none' } : { kind: 'margin', value: Math.min(...values) }
}
