/**
 * The drive train between ticks: piecewise linear, moved by exact exponentials, its switchings located.
 *
 * Coulomb friction with sticking at the load, backlash in a compliant train. Undisturbed intervals take one cached
 * matrix; an interval in which something switches is walked by its Taylor series, whose polynomials give the instants.
 * control-model.md §1, §6.
 */
import type { DriveOptions, Guard, Mode } from './drive-mode.ts'
import { firstExit } from './first-exit.ts'
import { COMPLIANT, INPUTS, RIGID, structure, transition } from './structure.ts'
import type { StateIndex, Structure } from './structure.ts'

const DEGREE = 18
/** Dips of a switching function that are rounding, not motion: rad/s, rad or N·m, all of order one here. */
const ROUNDING = 1e-14
/** Switchings in one interval before the walk gives up locating them: only a degenerate set of values gets there. */
const MAX_SWITCHINGS = 200

/** ‖A‖·h beyond which Taylor steps would be too many: an electrical time constant far below the tick. */
const STIFF = 64
/** Halvings of a unit that stiff intervals are cut into. */
const HALVINGS = 40

/** Pieces tried in one stiff interval while switchings are still located. */
const MAX_TRIES = 5000

export class Drive {
  readonly x: Float64Array
  readonly at: StateIndex
  /** Applied voltage, V: held from tick to tick. */
  v = 0
  /** Switchings located so far. */
  switchings = 0
  private readonly n: number
  private readonly options: DriveOptions
  private readonly friction: boolean
  private stuck = false
  /** Sliding direction; meaningless while stuck or without friction. */
  private direction = 1
  /** Side of the gap in contact; 0 in the gap. */
  private side = 0
  private mode: Mode
  private readonly modes: (Mode | undefined)[] = new Array(18)
  private readonly systems: (Structure | undefined)[] = new Array(4)
  private readonly transitions: ReturnType<typeof transition>[][] = [[], [], [], []]
  private readonly halves: ReturnType<typeof transition>[][] = [[], [], [], []]
  private readonly y: Float64Array
  private readonly series: Float64Array
  private readonly gamma = new Float64Array(DEGREE + 1)

  constructor(options: DriveOptions) {
    const compliant = options.plant.k_s !== null
    this.options = options
    this.at = compliant ? COMPLIANT : RIGID
    this.n = compliant ? 5 : 3
    this.x = new Float64Array(this.n)
    this.y = new Float64Array(this.n)
    this.series = new Float64Array((DEGREE + 1) * this.n)
    this.x[this.at.thetaLoad] = options.theta_0
    this.friction = options.tau_s > 0
    this.stuck = this.friction
    this.mode = this.modeNow()
    if (this.friction) this.release()
  }

  /** Move `units` units of time with the voltage held. */
  advance(units: number): void {
    const { mode, n, x, y, v } = this
    const Ad = mode.Ad[units]
    if (Ad === undefined) {
      this.cache(mode, units)
      this.advance(units)
      return
    }
    const bv = mode.bv[units] as Float64Array
    const b0 = mode.b0[units] as Float64Array
    for (let r = 0, k = 0; r < n; r++) {
      let sum = bv[r] * v + b0[r]
      for (let c = 0; c < n; c++, k++) sum += Ad[k] * x[c]
      y[r] = sum
    }
    const h = units * this.options.unit
    const guards = mode.guards
    for (let k = 0; k < guards.length; k++) {
      if (this.mayCross(guards[k], h)) {
        this.walk(h)
        return
      }
    }
    x.set(y)
  }

  /** Whether a guard may fall below zero between x and y: at the end, or in a dip between falling and rising. */
  private mayCross(guard: Guard, h: number): boolean {
    const { n, x, y, v } = this
    const { row, rateRow } = guard
    let start = guard.constant
    let end = guard.constant
    for (let c = 0; c < n; c++) {
      start += row[c] * x[c]
      end += row[c] * y[c]
    }
    if (!(end >= 0)) return true
    const held = guard.rateV * v + guard.rateConstant
    let startRate = held
    let endRate = held
    for (let c = 0; c < n; c++) {
      startRate += rateRow[c] * x[c]
      endRate += rateRow[c] * y[c]
    }
    return startRate < 0 && endRate > 0 && Math.min(start, end) < h * Math.max(-startRate, endRate)
  }

  /** An interval with switchings: Taylor steps up to each, bounded in number. */
  private walk(h: number): void {
    let remaining = h
    const limit = this.switchings + MAX_SWITCHINGS
    while (remaining > 0) {
      if (this.friction) this.release()
      const mode = this.mode
      if (mode.system.norm * remaining > STIFF) {
        remaining = this.descend(mode, remaining, this.switchings < limit)
        continue
      }
      const step = Math.min(remaining, 1 / mode.system.norm)
      this.expand(mode)
      let earliest = step
      let crossed: Guard | undefined
      if (this.switchings < limit) {
        for (const guard of mode.guards) {
          const t = this.exitOf(guard, step)
          if (t >= 0 && (crossed === undefined || t < earliest)) {
            earliest = t
            crossed = guard
          }
        }
      }
      this.evaluate(earliest)
      remaining = earliest === remaining ? 0 : remaining - earliest
      if (crossed !== undefined) this.cross(crossed)
    }
  }

  /**
   * Walks up to the first switching, or to the end, in exact pieces of unit/2^k: the longest that ends before a
   * switching, then the next shorter. Returns what is left of the interval.
   */
  private descend(mode: Mode, h: number, locate: boolean): number {
    const { n, x, y, v } = this
    const cache = this.halves[this.systemKey()]
    let remaining = h
    let suspect: Guard | undefined
    /** What is left at the end of the shortest piece known to end past a switching. */
    let past = 0
    let depth = 0
    for (let tries = 0; depth <= HALVINGS && remaining > 0; tries++) {
      const piece = this.options.unit * 2 ** -depth
      if (piece > remaining) {
        depth++
        continue
      }
      const { Ad, Bd } = (cache[depth] ??= transition(mode.system, piece))
      for (let r = 0; r < n; r++) {
        let sum = Bd[r * INPUTS] * v + Bd[r * INPUTS + 1] * mode.tau + Bd[r * INPUTS + 2] * mode.offset
        for (let c = 0; c < n; c++) sum += Ad[r * n + c] * x[c]
        y[r] = sum
      }
      const crossed = locate && tries < MAX_TRIES ? mode.guards.find((guard) => valueOf(guard, y) < -ROUNDING) : undefined
      if (crossed !== undefined && depth < HALVINGS) {
        suspect = crossed
        past = remaining - piece
        depth++
        continue
      }
      x.set(y)
      remaining -= piece
      // The shortest piece ends at the switching to within rounding, whichever side of it.
      if (depth === HALVINGS && suspect !== undefined) {
        this.cross(suspect)
        return remaining
      }
      // Rounding may let the halves pass where the whole did not: then begin again with long pieces.
      if (suspect !== undefined && remaining <= past) {
        suspect = undefined
        depth = 0
      }
    }
    return 0
  }

  /** Taylor coefficients of the state about now, in `series`. */
  private expand(mode: Mode): void {
    const { n, series, v } = this
    const { A, B } = mode.system
    series.set(this.x)
    for (let k = 0; k < DEGREE; k++) {
      for (let r = 0; r < n; r++) {
        let sum = k === 0 ? B[r * INPUTS] * v + B[r * INPUTS + 1] * mode.tau + B[r * INPUTS + 2] * mode.offset : 0
        for (let c = 0; c < n; c++) sum += A[r * n + c] * series[k * n + c]
        series[(k + 1) * n + r] = sum / (k + 1)
      }
    }
  }

  private evaluate(t: number): void {
    const { n, series, x } = this
    for (let r = 0; r < n; r++) {
      let sum = series[DEGREE * n + r]
      for (let k = DEGREE - 1; k >= 0; k--) sum = sum * t + series[k * n + r]
      x[r] = sum
    }
  }

  private exitOf(guard: Guard, step: number): number {
    const { n, series, gamma } = this
    for (let k = 0; k <= DEGREE; k++) {
      let sum = k === 0 ? guard.constant : 0
      for (let c = 0; c < n; c++) sum += guard.row[c] * series[k * n + c]
      gamma[k] = sum
    }
    return firstExit(gamma, DEGREE, step, ROUNDING)
  }

  private cross(guard: Guard): void {
    const { at, x } = this
    this.switchings++
    if (guard.crossed === 'contact') {
      x[at.delta] = Math.sign(this.side || guard.next) * (this.options.backlash / 2)
      this.side = guard.next
    } else if (this.stuck) {
      this.stuck = false
      this.direction = guard.next
    } else {
      x[at.omegaLoad] = 0
      if (at === RIGID) x[at.omegaMotor] = 0
      this.settle()
    }
    this.mode = this.modeNow()
  }

  /** Torque on the load but for friction, at rest. */
  private netTorque(): number {
    const { at, x, options, side } = this
    const { plant } = options
    if (at === RIGID) return plant.eta * plant.N * plant.k_t * x[at.i] - options.tau_load
    if (options.backlash > 0 && side === 0) return -options.tau_load
    const offset = side * (options.backlash / 2)
    const { k_s, d_s } = plant
    return (k_s ?? 0) * (x[at.delta] - offset) + (d_s ?? 0) * x[at.omegaMotor] - options.tau_load
  }

  /** At speed zero: stick, or go on in the direction of the torque. */
  private settle(): void {
    const net = this.netTorque()
    if (Math.abs(net) < this.options.tau_s) this.stuck = true
    else {
      this.stuck = false
      this.direction = net > 0 ? 1 : -1
    }
  }

  /** Let go of a stuck joint whose torque has jumped past τ_s, and turn one that stands still against its sliding direction. */
  private release(): void {
    const { at, x, options } = this
    if (x[at.omegaLoad] !== 0) return
    const net = this.netTorque()
    const leaves = this.stuck
      ? Math.abs(net) >= options.tau_s
      : this.direction * net - options.tau_c < -1e-12 * options.tau_s
    if (!leaves) return
    this.settle()
    this.mode = this.modeNow()
  }

  private modeNow(): Mode {
    const gaps = this.options.backlash > 0
    const motion = !this.friction ? 0 : this.stuck ? 1 : this.direction > 0 ? 2 : 3
    const key = motion * 4 + (gaps ? this.side + 1 : 3)
    return (this.modes[key] ??= this.makeMode(gaps))
  }

  private makeMode(gaps: boolean): Mode {
    const { options, stuck, direction, side, friction } = this
    const system = this.system()
    const tau = -options.tau_load - (friction && !stuck ? direction * options.tau_c : 0)
    const mode: Mode = { system, tau, offset: side * (options.backlash / 2), guards: [], Ad: [], bv: [], b0: [] }
    if (friction && !stuck) this.addGuard(mode, 'friction', -direction, 0, (row) => (row[this.at.omegaLoad] = direction))
    if (friction && stuck) {
      for (const sign of [1, -1]) {
        // The net torque is linear in the state: its constant part stands at x = 0, its row at the unit states.
        const { row, constant } = this.netTorqueRow()
        this.addGuard(mode, 'friction', sign, options.tau_s - sign * constant, (r) => row.forEach((w, c) => (r[c] = -sign * w)))
      }
    }
    if (gaps && side === 0) {
      for (const sign of [1, -1]) this.addGuard(mode, 'contact', sign, options.backlash / 2, (row) => (row[this.at.delta] = -sign))
    }
    if (gaps && side !== 0) this.addGuard(mode, 'contact', 0, -options.backlash / 2, (row) => (row[this.at.delta] = side))
    return mode
  }

  private netTorqueRow(): { row: Float64Array; constant: number } {
    const { at, options, side } = this
    const { plant, tau_load } = options
    const row = new Float64Array(this.n)
    if (at === RIGID) row[at.i] = plant.eta * plant.N * plant.k_t
    else if (!(options.backlash > 0 && side === 0)) {
      row[at.delta] = plant.k_s ?? 0
      row[at.omegaMotor] = plant.d_s ?? 0
      return { row, constant: -tau_load - row[at.delta] * side * (options.backlash / 2) }
    }
    return { row, constant: -tau_load }
  }

  private addGuard(mode: Mode, crossed: Guard['crossed'], next: number, constant: number, fill: (row: Float64Array) => void): void {
    const { n } = this
    const { A, B } = mode.system
    const row = new Float64Array(n)
    fill(row)
    const rateRow = new Float64Array(n)
    let rateV = 0
    let rateConstant = 0
    for (let r = 0; r < n; r++) {
      for (let c = 0; c < n; c++) rateRow[c] += row[r] * A[r * n + c]
      rateV += row[r] * B[r * INPUTS]
      rateConstant += row[r] * (B[r * INPUTS + 1] * mode.tau + B[r * INPUTS + 2] * mode.offset)
    }
    mode.guards.push({ row, constant, rateRow, rateV, rateConstant, crossed, next })
  }

  /** The four linear systems, made when first needed; their transitions are shared by the modes. */
  private systemKey(): number {
    return (this.stuck ? 1 : 0) + (this.options.backlash > 0 && this.side === 0 ? 2 : 0)
  }

  private system(): Structure {
    const key = this.systemKey()
    return (this.systems[key] ??= structure(this.options.plant, this.options.T_winding, (key & 1) === 1, (key & 2) === 2))
  }

  private cache(mode: Mode, units: number): void {
    const { n } = this
    const shared = this.transitions[this.systemKey()]
    const { Ad, Bd } = (shared[units] ??= transition(mode.system, units * this.options.unit))
    const bv = new Float64Array(n)
    const b0 = new Float64Array(n)
    for (let r = 0; r < n; r++) {
      bv[r] = Bd[r * INPUTS]
      b0[r] = Bd[r * INPUTS + 1] * mode.tau + Bd[r * INPUTS + 2] * mode.offset
    }
    mode.Ad[units] = Ad
    mode.bv[units] = bv
    mode.b0[units] = b0
  }
}

function valueOf(guard: Guard, state: Float64Array): number {
  let sum = guard.constant
  for (let c = 0; c < state.length; c++) sum += guard.row[c] * state[c]
  return sum
}
