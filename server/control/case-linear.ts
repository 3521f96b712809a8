import { analyse, type LinearReport, type LoopReport } from './analyse.ts'
import type { Tally} from './case-tally.ts';
import { type Figure } from './case-tally.ts'
import { frequencyResponse } from './frequency-response.ts'
import { limitAbove } from './limit-search.ts'
import type { ControlMode, JointModel } from './model.ts'

export interface LinearCase extends JointModel {
  readonly id: string
  readonly expect: Record<string, unknown>
}

export interface ResponseCase {
  readonly case: string
  readonly loop: ControlMode
  readonly q: number
  readonly tol_rel: number
  readonly points: readonly Record<string, number>[]
}

const FIGURE = ['value', 'tol', 'tol_rel', 'routes', 'reads', 'simulation_difference']
/** Frequencies of crossings are stated without a tolerance; a per mille is what their loop's own tolerance comes to. */
const CROSSOVER_TOL_REL = 1e-3

/** Checks one linear case: control-cases.json `cases`. */
export function checkLinear(tally: Tally, item: LinearCase): void {
  const report = analyse(item)
  const { expect } = item
  const name = item.id
  for (const [key, value] of Object.entries(expect)) {
    const at = `${name} ${key}`
    const figure = value as Figure
    switch (key) {
      case 'T_h':
        tally.close(at, report.T_h, value as number, 1e-12 * (value as number))
        break
      case 'p':
      case 'q':
      case 'n_states':
      case 'verdict':
        tally.same(at, report[key], value)
        break
      case 'rho':
        checkFigure(tally, at, figure, report.rho)
        break
      case 'decay_rate':
        checkFigure(tally, at, figure, report.decayRate)
        break
      case 'rho_per_current_tick':
        checkFigure(tally, at, figure, report.rhoPerCurrentTick)
        break
      case 'eigenvalues':
        checkEigenvalues(tally, at, report, value as { re: number; im: number; tol: number }[])
        break
      case 'boundary':
        checkBoundary(tally, at, item, figure)
        break
      case 'loops':
        for (const [loop, figures] of Object.entries(value as Record<string, Record<string, unknown>>)) {
          const ours = report.loops[loop as ControlMode]
          if (ours) checkLoop(tally, `${name} ${loop}`, ours, figures)
          else tally.fail(`${name} ${loop}: the joint closes no such loop`)
        }
        break
      default:
        tally.fail(`${at}: this figure is not known here`)
    }
  }
}

function checkFigure(tally: Tally, name: string, figure: Figure, ours: number | null, more: readonly string[] = []): void {
  tally.known(name, figure, [...FIGURE, ...more])
  tally.figure(name, figure, ours)
}

function checkEigenvalues(tally: Tally, name: string, report: LinearReport, theirs: readonly { re: number; im: number; tol: number }[]): void {
  theirs.forEach((wanted, k) => {
    tally.known(`${name}[${k}]`, wanted, ['re', 'im', 'tol'])
    const { re, im } = report.spectrum
    const nearest = Math.min(...Array.from(re, (x, i) => Math.hypot(x - wanted.re, im[i] - wanted.im)))
    tally.pass(nearest <= wanted.tol, () => `${name}[${k}]: ${wanted.re} + ${wanted.im}j is missed by ${nearest}`)
  })
}

function checkBoundary(tally: Tally, name: string, item: LinearCase, figure: Figure): void {
  tally.known(name, figure, [...FIGURE, 'parameter', 'meaning'])
  const parameter = String(figure.parameter)
  const given = (item.firmware as unknown as Record<string, number>)[parameter]
  const limit = limitAbove(item, parameter, Math.max(given, Math.abs(figure.value ?? 1)) * 1000)
  tally.figure(name, figure, limit.kind === 'limit' ? limit.value : null)
}

function checkLoop(tally: Tally, name: string, loop: LoopReport, figures: Record<string, unknown>): void {
  for (const [key, value] of Object.entries(figures)) {
    const at = `${name} ${key}`
    const figure = value as Figure
    switch (key) {
      case 'rho':
        checkFigure(tally, at, figure, loop.rho, ['period'])
        if ('period' in figure) tally.close(`${at}.period`, loop.period, figure.period as number, 1e-9 * (figure.period as number))
        break
      case 'verdict':
        tally.same(at, loop.verdict, value)
        break
      case 'margins':
        tally.same(at, loop.gainUp.kind, value)
        break
      case 'gain_margin_db':
        checkFigure(tally, at, figure, loop.gainUp.kind === 'margin' ? loop.gainUp.gainMarginDb : null)
        break
      case 'gain_margin_down_db':
        checkFigure(tally, at, figure, loop.gainDown.kind === 'margin' ? loop.gainDown.gainMarginDb : null)
        break
      case 'phase_margin_deg':
        checkFigure(tally, at, figure, loop.phase.kind === 'margin' ? loop.phase.phaseMarginDeg : null)
        break
      case 'delay_margin_s':
        checkDelay(tally, at, loop, figure)
        break
      case 'Ms':
        checkFigure(tally, at, figure, loop.M_s.kind === 'peak' ? loop.M_s.value : null)
        break
      case 'Ms_lifted_norm':
        checkFigure(tally, at, figure, loop.Ms_lifted_norm.kind === 'peak' ? loop.Ms_lifted_norm.value : null)
        break
      case 'dc_gain':
        checkFigure(tally, at, figure, loop.bandwidths?.dcGain ?? null)
        break
      case 'bandwidth_hz':
        checkFigure(tally, at, figure, loop.bandwidths?.relative.kind === 'bandwidth' ? loop.bandwidths.relative.hz : null)
        break
      case 'bandwidth_abs_hz':
        checkFigure(tally, at, figure, loop.bandwidths?.absolute.kind === 'bandwidth' ? loop.bandwidths.absolute.hz : null)
        break
      default:
        tally.fail(`${at}: this figure is not known here`)
    }
  }
}

function checkDelay(tally: Tally, name: string, loop: LoopReport, figure: Figure): void {
  const ours = loop.delay.kind === 'margin' ? loop.delay : null
  checkFigure(tally, name, figure, ours?.delay ?? null, ['ticks', 'crossover_hz'])
  if (figure.value === null || figure.tol === undefined) return
  // Ticks are the same margin in another unit: the tolerance scales with it.
  if ('ticks' in figure) tally.close(`${name}.ticks`, ours?.ticks ?? null, figure.ticks as number, (figure.tol * (figure.ticks as number)) / figure.value)
  if ('crossover_hz' in figure) tally.close(`${name}.crossover_hz`, ours?.crossoverHz ?? null, figure.crossover_hz as number, CROSSOVER_TOL_REL * (figure.crossover_hz as number))
}

/** At a zero of the window both sides hold rounding alone: this much of L or T is not compared. */
const RESPONSE_FLOOR = 1e-13

/** Checks L and T at given frequencies: control-cases.json `frequency_response`. */
export function checkResponse(tally: Tally, item: ResponseCase, cases: readonly LinearCase[]): void {
  const name = `${item.case} ${item.loop} response`
  tally.known(name, item, ['case', 'loop', 'q', 'tol_rel', 'points', 'routes', 'simulation_worst_difference_of_abs_T'])
  const of = cases.find((candidate) => candidate.id === item.case)
  if (!of) {
    tally.fail(`${name}: no case of this name in the file`)
    return
  }
  const ours = frequencyResponse(of, item.loop, item.points.map((point) => point.hz))
  tally.same(`${name} q`, item.loop === 'current' ? 1 : analyse(of).q, item.q)
  item.points.forEach((point, k) => {
    tally.known(`${name}[${k}]`, point, ['hz', 'L_re', 'L_im', 'T_re', 'T_im'])
    for (const [letter, re, im] of [['L', ours.L_re[k], ours.L_im[k]], ['T', ours.T_re[k], ours.T_im[k]]] as const) {
      if (!(`${letter}_re` in point)) continue
      const wr = point[`${letter}_re`]
      const wi = point[`${letter}_im`]
      const off = Math.hypot(re - wr, im - wi)
      tally.pass(off <= item.tol_rel * Math.hypot(wr, wi) + RESPONSE_FLOOR, () => `${name} ${letter} at ${point.hz} Hz: ${re} + ${im}j where ${wr} + ${wi}j is expected`)
    }
  })
}
