/** R, k_e and L from voltage, current and speed. */
import type { CheckedLog } from './bench-log.ts'
import { refused, RUNS } from './estimate.ts'
import type { Estimate } from './estimate.ts'
import { GroupedErrors, LeastSquares } from './least-squares.ts'
import type { Fit } from './least-squares.ts'
import { ResidualCollector } from './signals.ts'
import type { ResidualSeries } from './signals.ts'

export interface ElectricalFit {
  /** Whole resistance of the circuit, switches included, at the winding's temperature, Ω. */
  R: Estimate
  /** N·k_e: voltage per output speed, V·s/rad. */
  E: Estimate
  L: Estimate
  /** Constant part of the voltage that the model does not explain, V. */
  offset: number
  /** Measured minus modelled: current where the rate resolves L, else voltage. */
  residual: ResidualSeries | null
  residualUnit: 'A' | 'V'
  condition: number
}

/** Relative standard error beyond which a value is not given. */
const WORST_RELATIVE_ERROR = 0.1
/** Condition of the scaled regressors beyond which they are no longer told apart. */
export const WORST_CONDITION = 1e4
/** Share of a current step that must be left after one row for L to show: e^(−dt·R/L). */
const LEAST_MEMORY = 0.05

/** The electrical part of a checked log. `speed` and `voltage` as signals.ts gives them. */
export function fitElectrical(checked: CheckedLog, speed: Float64Array | null, voltage: Float64Array | null): ElectricalFit {
  if (voltage === null) return none('The log has neither voltage nor duty with a bus voltage.', RUNS.voltage)
  if (speed === null) return none('The log has neither position nor speed.', RUNS.speeds)
  const rows = new Rows(checked, speed, voltage)
  if (rows.currentSpan === 0) return none('The current never changes.', RUNS.stall)
  const start = recursive(rows)
  if (start === null) return statically(rows)
  return resolved(rows, start)
}

function none(reason: string, remedy: string): ElectricalFit {
  const no = refused(reason, remedy)
  return { R: no, E: no, L: no, offset: 0, residual: null, residualUnit: 'V', condition: Infinity }
}

/** Pairs of neighbouring rows. */
class Rows {
  readonly checked: CheckedLog
  readonly i: Float64Array
  readonly v: Float64Array
  readonly omega: Float64Array
  readonly currentSpan: number
  /** Rows whose errors may hang together: 20 ms or a fortieth of the log. */
  readonly group: number

  constructor(checked: CheckedLog, omega: Float64Array, v: Float64Array) {
    this.checked = checked
    this.i = checked.log.current
    this.v = v
    this.omega = omega
    this.currentSpan = spanOf(this.i)
    this.group = Math.max(5, Math.min(Math.round(0.02 / checked.dt), Math.floor(this.i.length / 40)))
  }

  /** Calls `visit(k, h, first)` for each row k with a follower, h seconds apart. */
  each(visit: (k: number, h: number, first: boolean) => void): void {
    const { time } = this.checked.log
    for (const { from, to } of this.checked.stretches) {
      for (let k = from; k + 1 < to; k++) visit(k, time[k + 1] - time[k], k === from)
    }
  }

  meanSpeed(k: number): number {
    return 0.5 * (this.omega[k] + this.omega[k + 1])
  }
}

/** i[k+1] = α·i[k] + β·v[k] + …: a first guess, or null where a row is too long to see the current's memory. */
function recursive(rows: Rows): { R: number; E: number; L: number; offset: number } | null {
  const ls = new LeastSquares(4)
  const row = new Float64Array(5)
  rows.each((k) => {
    row.set([rows.i[k], rows.v[k], rows.meanSpeed(k), 1, rows.i[k + 1]])
    ls.add(row)
  })
  const { coefficients: c, condition } = ls.solve()
  const bound = Number.isFinite(condition) ? c : solveWithout(rows)
  const [alpha, beta] = bound
  if (!(alpha > LEAST_MEMORY) || !(alpha < 0.9999) || !(beta > 0)) return null
  const R = (1 - alpha) / beta
  return { R, E: Math.max(0, -bound[2] / beta), L: (-R * rows.checked.dt) / Math.log(alpha), offset: -bound[3] / beta }
}

/** The same without speed, for a held joint: the speed column is zero and tells nothing. */
function solveWithout(rows: Rows): Float64Array {
  const ls = new LeastSquares(3)
  rows.each((k) => ls.add([rows.i[k], rows.v[k], 1, rows.i[k + 1]]))
  const { coefficients: c } = ls.solve()
  return Float64Array.of(c[0], c[1], 0, c[2])
}

/**
 * Output error: the current that the model gives from voltage and speed alone, against the measured one.
 *
 * Gauss–Newton with halved steps. Unlike the recursive form it is not biased by noise on the current.
 */
function resolved(rows: Rows, start: { R: number; E: number; L: number; offset: number }): ElectricalFit {
  const turning = spanOf(rows.omega) > 0
  const width = turning ? 4 : 3
  let p = start
  let error = runModel(rows, p, null, turning)
  let fit: Fit | null = null
  for (let iteration = 0; iteration < 40; iteration++) {
    const ls = new LeastSquares(width)
    runModel(rows, p, ls, turning)
    fit = ls.solve()
    if (!Number.isFinite(fit.condition)) break
    const c = fit.coefficients
    let factor = 1
    let improved = false
    for (let halving = 0; halving < 20; halving++, factor /= 2) {
      const next = { R: p.R + factor * c[0], L: p.L + factor * c[1], offset: p.offset + factor * c[2], E: turning ? p.E + factor * c[3] : 0 }
      if (!(next.R > 0) || !(next.L > 0)) continue
      const nextError = runModel(rows, next, null, turning)
      if (nextError > error) continue
      improved = error - nextError > 1e-12 * error
      p = next
      error = nextError
      break
    }
    if (!improved) break
  }
  if (fit === null || !Number.isFinite(fit.condition)) return none('Voltage and current do not vary enough to tell resistance and inductance apart.', RUNS.stall)
  const collector = new ResidualCollector()
  const grouped = new GroupedErrors(width)
  runModel(rows, p, null, turning, { collector, grouped })
  const residual = collector.series()
  const se = standardErrors(fit, grouped)
  const trusted = fit.condition <= WORST_CONDITION
  return {
    R: given(p.R, se[0], trusted, 'The current hardly changes against its noise, or only together with the speed.', RUNS.stall),
    L: given(p.L, se[1], trusted, 'The current’s own rise hardly shows in the log.', RUNS.fast),
    E: turning
      ? given(p.E, se[3], trusted, 'The speed hardly changes, or only together with the current.', RUNS.speeds)
      : refused('The joint does not turn.', RUNS.speeds),
    offset: p.offset,
    residual,
    residualUnit: 'A',
    condition: fit.condition,
  }
}

/** Runs the model over the log; returns the sum of squared errors, fills `ls` with sensitivities or `collector` with residuals. */
function runModel(
  rows: Rows,
  p: { R: number; E: number; L: number; offset: number },
  ls: LeastSquares | null,
  turning: boolean,
  final?: { collector: ResidualCollector; grouped: GroupedErrors },
): number {
  const { time } = rows.checked.log
  const row = new Float64Array(turning ? 5 : 4)
  let h = NaN
  let [a, g, aR, aL, gR, gL] = [0, 0, 0, 0, 0, 0]
  let [y, sR, sL, sV, sE] = [0, 0, 0, 0, 0]
  let squares = 0
  rows.each((k, spacing, first) => {
    if (spacing !== h) {
      h = spacing
      a = Math.exp((-p.R * h) / p.L)
      g = -Math.expm1((-p.R * h) / p.L) / p.R
      aR = (-h / p.L) * a
      aL = ((p.R * h) / (p.L * p.L)) * a
      gR = (-aR - g) / p.R
      gL = -aL / p.R
    }
    if (first) {
      y = rows.i[k]
      sR = sL = sV = sE = 0
    }
    const omega = rows.meanSpeed(k)
    const force = rows.v[k] - p.E * omega - p.offset
    sR = a * sR + aR * y + gR * force
    sL = a * sL + aL * y + gL * force
    sV = a * sV - g
    sE = a * sE - g * omega
    y = a * y + g * force
    const r = rows.i[k + 1] - y
    squares += r * r
    if (ls === null && final === undefined) return
    row[0] = sR
    row[1] = sL
    row[2] = sV
    if (turning) row[3] = sE
    row[turning ? 4 : 3] = r
    ls?.add(row)
    if (final === undefined) return
    final.collector.add(time[k + 1], r, first)
    final.grouped.add(row, 0, r)
    if (k % rows.group === rows.group - 1) final.grouped.close()
  })
  return squares
}

/** Rows longer than the winding's memory: v = R·ī + E·ω̄ + offset, with means over each row. L does not show. */
function statically(rows: Rows): ElectricalFit {
  const turning = spanOf(rows.omega) > 0
  const width = turning ? 3 : 2
  const ls = new LeastSquares(width)
  const steady = steadyRows(rows)
  const row = new Float64Array(width + 1)
  const fillRow = (k: number): void => {
    row[0] = 0.5 * (rows.i[k] + rows.i[k + 1])
    row[1] = 1
    if (turning) row[2] = rows.meanSpeed(k)
    row[width] = rows.v[k]
  }
  rows.each((k) => {
    if (!steady(k)) return
    fillRow(k)
    ls.add(row)
  })
  const fit = ls.solve()
  if (!Number.isFinite(fit.condition)) return none('Voltage, current and speed keep one fixed proportion.', RUNS.speeds)
  const collector = new ResidualCollector()
  const grouped = new GroupedErrors(width)
  rows.each((k, _, first) => {
    if (k % rows.group === 0) grouped.close()
    if (!steady(k)) return
    fillRow(k)
    let r = row[width]
    for (let c = 0; c < width; c++) r -= row[c] * fit.coefficients[c]
    collector.add(rows.checked.log.time[k], r, first)
    grouped.add(row, 0, r)
  })
  const residual = collector.series()
  const se = standardErrors(fit, grouped)
  const trusted = fit.condition <= WORST_CONDITION
  const [R, offset, E] = fit.coefficients
  return {
    R: given(R, se[0], trusted, 'The current hardly changes against its noise, or only together with the speed.', RUNS.stall),
    E: turning
      ? given(E, se[2], trusted, 'The speed hardly changes, or only together with the current.', RUNS.speeds)
      : refused('The joint does not turn.', RUNS.speeds),
    L: refused(`At ${Math.round(1 / rows.checked.dt)} Hz the current settles within a row, so its rise does not show.`, RUNS.fast),
    offset,
    residual,
    residualUnit: 'V',
    condition: fit.condition,
  }
}

/** Rows over which the current stays put, so that its mean is that of its ends; all rows where too few do. */
function steadyRows(rows: Rows): (k: number) => boolean {
  const most = 0.03 * rows.currentSpan
  const calm = (k: number): boolean => Math.abs(rows.i[k + 1] - rows.i[k]) <= most && (k === 0 || Math.abs(rows.i[k] - rows.i[k - 1]) <= most)
  let count = 0
  rows.each((k) => {
    if (calm(k)) count++
  })
  return count >= 50 ? calm : () => true
}

function standardErrors(fit: Fit, grouped: GroupedErrors): Float64Array {
  const n = fit.coefficients.length
  const covariance = grouped.covariance(fit)
  return Float64Array.from({ length: n }, (_, k) => Math.sqrt(Math.max(0, covariance[k * n + k])))
}

function given(value: number, standardError: number, trusted: boolean, reason: string, remedy: string): Estimate {
  if (!trusted || !(value > 0) || !(standardError <= WORST_RELATIVE_ERROR * value)) return refused(reason, remedy)
  return { kind: 'estimate', value, standardError }
}

function spanOf(column: Float64Array): number {
  let [low, high] = [Infinity, -Infinity]
  for (let k = 0; k < column.length; k++) {
    if (column[k] < low) low = column[k]
    if (column[k] > high) high = column[k]
  }
  return high - low
}
