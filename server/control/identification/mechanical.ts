/** J, b and τ_c from current and motion. */
import type { CheckedLog } from './bench-log.ts'
import { WORST_CONDITION } from './electrical.ts'
import { refused, RUNS } from './estimate.ts'
import type { Estimate } from './estimate.ts'
import { GroupedErrors, LeastSquares, reflect } from './least-squares.ts'
import { ResidualCollector } from './signals.ts'
import type { ResidualSeries, SpeedSignal } from './signals.ts'

/** Longest piece that keeps its own start, s: slow torques that the model lacks stay within a piece. */
const PIECE = 0.1
/** Shortest piece, rows. */
const LEAST_ROWS = 8
/** Share of the top speed above which the joint counts as moving. */
const MOVING = 0.03

interface Piece {
  from: number
  to: number
  sign: number
}

/** Accelerations per ampere, per unit of speed, by friction and by load: the torque constant is not needed for these. */
export interface MotionFit {
  kind: 'fit'
  /** K/J, b/J, τ_c/J, τ_load/J (the last only where the joint turned both ways). */
  coefficients: Float64Array
  covariance: Float64Array
  condition: number
  bothWays: boolean
  residual: ResidualSeries
  residualUnit: 'rad' | 'rad/s'
  movingTime: number
  peakCurrent: number
  topSpeed: number
}

export interface NoMotion {
  kind: 'refused'
  reason: string
  remedy: string
  movingTime: number
}

/**
 * Fits the motion's integrals over pieces of one direction.
 *
 * With torque constant K: θ = θ₀ + ω₀·t + (K/J)·∬i − (b/J)·∫θ − (τ_c/J)·sign·t²/2 − (τ_load/J)·t²/2. Each piece keeps
 * θ₀ and ω₀ to itself (eliminated by reflections), so noise and counts stand on the left side only.
 */
export function fitMotion(checked: CheckedLog, motion: SpeedSignal | null): MotionFit | NoMotion {
  const none = (reason: string, remedy: string, movingTime: number): NoMotion => ({ kind: 'refused', reason, remedy, movingTime })
  if (motion === null) return none('The log has neither position nor speed.', RUNS.acceleration, 0)
  const speed = motion.omega
  const pieces = movingPieces(checked, motion)
  const rows = pieces.reduce((sum, p) => sum + p.to - p.from, 0)
  const movingTime = rows * checked.dt
  if (rows < 50) return none('The joint hardly moves.', RUNS.acceleration, movingTime)
  const bothWays = pieces.some((p) => p.sign > 0) && pieces.some((p) => p.sign < 0)
  const blocks = new Blocks(checked, speed, bothWays)
  const ls = new LeastSquares(blocks.shared)
  for (const piece of pieces) {
    blocks.fill(piece)
    blocks.reduceInto(ls)
  }
  const fit = ls.solve()
  if (!Number.isFinite(fit.condition)) return none('Current and motion keep one fixed proportion.', RUNS.acceleration, movingTime)
  const collector = new ResidualCollector()
  const grouped = new GroupedErrors(blocks.shared)
  for (const piece of pieces) {
    blocks.residuals(piece, fit.coefficients, collector)
    blocks.scores(piece, fit.coefficients, grouped)
  }
  let [peakCurrent, topSpeed] = [0, 0]
  for (const { from, to } of pieces) {
    for (let k = from; k < to; k++) {
      peakCurrent = Math.max(peakCurrent, Math.abs(checked.log.current[k]))
      topSpeed = Math.max(topSpeed, Math.abs(speed[k]))
    }
  }
  return {
    kind: 'fit',
    coefficients: fit.coefficients,
    covariance: grouped.covariance(fit),
    condition: fit.condition,
    bothWays,
    residual: collector.series(),
    residualUnit: blocks.unit,
    movingTime,
    peakCurrent,
    topSpeed,
  }
}

function movingPieces({ stretches, dt }: CheckedLog, { omega: speed, half }: SpeedSignal): Piece[] {
  let top = 0
  for (let k = 0; k < speed.length; k++) top = Math.max(top, Math.abs(speed[k]))
  const least = MOVING * top
  // The slope's window smears a start or a stop over its half-width.
  const margin = Math.max(1, half)
  const longest = Math.max(LEAST_ROWS, Math.round(PIECE / dt))
  const pieces: Piece[] = []
  for (const { from, to } of stretches) {
    let start = from
    for (let k = from; k <= to; k++) {
      const goesOn = k < to && Math.abs(speed[k]) > least && (k === start || speed[k] * speed[start] > 0)
      if (goesOn) continue
      const last = k - margin
      for (let a = start + margin; a + LEAST_ROWS <= last; a += longest) {
        const b = last - a < longest + LEAST_ROWS ? last : a + longest
        pieces.push({ from: a, to: b, sign: Math.sign(speed[start]) })
        if (b === last) break
      }
      start = k < to && Math.abs(speed[k]) > least ? k : k + 1
    }
  }
  return pieces
}

/** The regression block of one piece: its own columns, the shared ones, the response. */
class Blocks {
  readonly shared: number
  readonly unit: 'rad' | 'rad/s'
  private readonly own: number
  private readonly width: number
  private M = new Float64Array(0)
  private rows = 0
  private readonly checked: CheckedLog
  private readonly speed: Float64Array
  private readonly bothWays: boolean

  constructor(checked: CheckedLog, speed: Float64Array, bothWays: boolean) {
    this.checked = checked
    this.speed = speed
    this.bothWays = bothWays
    this.unit = checked.log.position === undefined ? 'rad/s' : 'rad'
    this.own = checked.log.position === undefined ? 1 : 2
    this.shared = bothWays ? 4 : 3
    this.width = this.own + this.shared + 1
  }

  fill({ from, to, sign }: Piece): void {
    const { time, position, current } = this.checked.log
    const { width, own, shared, speed, bothWays } = this
    this.rows = to - from
    if (this.M.length < this.rows * width) this.M = new Float64Array(this.rows * width)
    const { M } = this
    let [charge, twice, travel] = [0, 0, 0]
    for (let k = from; k < to; k++) {
      if (k > from) {
        const h = time[k] - time[k - 1]
        const before = charge
        charge += 0.5 * h * (current[k] + current[k - 1])
        // The current taken as a straight line between rows: its double integral carries h²·(i − i′)/12 beside the trapezoid.
        twice += 0.5 * h * (charge + before) - ((current[k] - current[k - 1]) * h * h) / 12
        travel +=
          position === undefined
            ? 0.5 * h * (speed[k] + speed[k - 1])
            : 0.5 * h * (position[k] + position[k - 1] - 2 * position[from])
      }
      const t = time[k] - time[from]
      const at = (k - from) * width
      const push = position === undefined ? t : (t * t) / 2
      M[at] = 1
      if (own === 2) M[at + 1] = t
      M[at + own] = position === undefined ? charge : twice
      M[at + own + 1] = -travel
      M[at + own + 2] = -sign * push
      if (bothWays) M[at + own + 3] = -push
      M[at + own + shared] = position === undefined ? speed[k] : position[k] - position[from]
    }
  }

  /** Eliminates the piece's own columns and hands the rest on. */
  reduceInto(ls: LeastSquares): void {
    const { M, rows, width, own, shared } = this
    reflect(M, rows, width, own)
    for (let r = own; r < rows; r++) ls.add(M.subarray(r * width + own, r * width + own + shared + 1))
  }

  /** The piece as one group of rows whose errors hang together: noise on the current adds up along it. */
  scores(piece: Piece, coefficients: Float64Array, into: GroupedErrors): void {
    this.fill(piece)
    const { M, rows, width, own, shared } = this
    reflect(M, rows, width, own)
    for (let r = own; r < rows; r++) {
      let residual = M[r * width + own + shared]
      for (let c = 0; c < shared; c++) residual -= coefficients[c] * M[r * width + own + c]
      into.add(M, r * width + own, residual)
    }
    into.close()
  }

  residuals(piece: Piece, coefficients: Float64Array, into: ResidualCollector): void {
    this.fill(piece)
    const { M, rows, width, own, shared } = this
    const rest = new LeastSquares(own)
    const row = new Float64Array(own + 1)
    const left = new Float64Array(rows)
    for (let r = 0; r < rows; r++) {
      left[r] = M[r * width + own + shared]
      for (let c = 0; c < shared; c++) left[r] -= coefficients[c] * M[r * width + own + c]
      for (let c = 0; c < own; c++) row[c] = M[r * width + c]
      row[own] = left[r]
      rest.add(row)
    }
    const { coefficients: start } = rest.solve()
    for (let r = 0; r < rows; r++) {
      for (let c = 0; c < own; c++) left[r] -= start[c] * M[r * width + c]
      into.add(this.checked.log.time[piece.from + r], left[r], r === 0)
    }
  }
}

/** Relative standard error beyond which a value is not given, and the share of the peak torque that is small enough anyway. */
const WORST_RELATIVE_ERROR = 0.1
const SMALL_TORQUE = 0.02

export interface Mechanics {
  /** Whole inertia and drag at the output, friction moving, and the steady load found beside them. */
  J: Estimate
  b: Estimate
  tau_c: Estimate
  tau_load: Estimate
}

/**
 * The motion's values from its fitted accelerations.
 *
 * @param K  torque at the output per ampere, N·m/A, with its relative standard error; null when unknown
 */
export function mechanicsOf(fit: MotionFit | NoMotion, K: { value: number; relativeError: number } | null): Mechanics {
  if (fit.kind === 'refused') return all(refused(fit.reason, fit.remedy))
  if (K === null) return all(refused('The torque constant is neither given nor identified.', RUNS.speeds))
  const { coefficients: c, covariance, bothWays } = fit
  const n = c.length
  const relativeJ = Math.sqrt(Math.max(0, covariance[0])) / Math.abs(c[0])
  if (!(c[0] > 0) || !(relativeJ <= WORST_RELATIVE_ERROR) || fit.condition > WORST_CONDITION) {
    return all(refused('The joint hardly accelerates against the noise, or always in proportion to its speed.', RUNS.acceleration))
  }
  const J = K.value / c[0]
  const torque = (j: number, lever: number, reason: string): Estimate => {
    const value = (K.value * c[j]) / c[0]
    const own = covariance[j * n + j] - (2 * c[j] * covariance[j]) / c[0] + (c[j] / c[0]) ** 2 * covariance[0]
    const standardError = Math.hypot((K.value / c[0]) * Math.sqrt(Math.max(0, own)), value * K.relativeError)
    const enough = standardError <= WORST_RELATIVE_ERROR * Math.abs(value) || standardError * lever <= SMALL_TORQUE * K.value * fit.peakCurrent
    return enough ? { kind: 'estimate', value, standardError } : refused(reason, RUNS.reversals)
  }
  const oneWay = refused('The joint turns one way only, so friction and load cannot be told apart.', RUNS.reversals)
  return {
    J: { kind: 'estimate', value: J, standardError: J * Math.hypot(relativeJ, K.relativeError) },
    b: torque(1, fit.topSpeed, 'The drag hardly shows: too few different speeds against the noise.'),
    tau_c: bothWays ? torque(2, 1, 'The friction hardly shows against the drag: too few different speeds.') : oneWay,
    tau_load: bothWays ? torque(3, 1, 'The load hardly shows against the noise.') : oneWay,
  }
}

function all(no: Estimate): Mechanics {
  return { J: no, b: no, tau_c: no, tau_load: no }
}
