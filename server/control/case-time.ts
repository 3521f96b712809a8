import type { Tally} from './case-tally.ts';
import { type Figure } from './case-tally.ts'
import { cancellingIntegral, integratorLimit, integratorLimitByEigenvalues, lockedRotorLimit, windingPole, windowDelay } from './closed-forms.ts'
import { NumericError } from './errors.ts'
import type { Firmware, JointModel, Plant } from './model.ts'
import { resistanceAt, velocityQuantum } from './plant.ts'
import { simulate, type SimulationOptions } from './simulation/simulate.ts'
import { steadyTemperature, timeToTemperature } from './simulation/winding-heat.ts'
import { timingOf } from './timing.ts'
import { verdict } from './verdict.ts'

export interface NonlinearCase extends JointModel {
  readonly id: string
  readonly simulation: SimulationOptions
  readonly expect: Record<string, Figure>
}

export interface ThermalCase {
  readonly id: string
  readonly inputs: Record<string, number>
  readonly expect: Record<string, Figure>
}

export type ClosedFormCase = Record<string, unknown> & { readonly id: string }
export type RefusalCase = { readonly f_c: number; readonly f_o: number; readonly p?: number; readonly q?: number; readonly reads: string }

/** Checks the metrics of one simulated step: control-cases.json `nonlinear`. */
export function checkNonlinear(tally: Tally, item: NonlinearCase): void {
  const { metrics } = simulate(item, { ...item.simulation, trace_points: 0 })
  const { step } = metrics
  const ours: Record<string, number | null> = {
    rise_time: step?.riseTime.kind === 'time' ? step.riseTime.seconds : null,
    overshoot: step?.overshoot ?? null,
    settling_time: step?.settlingTime.kind === 'time' ? step.settlingTime.seconds : null,
    final_error: metrics.finalError,
    peak_current: metrics.peakCurrent,
    rms_current: metrics.rmsCurrent,
    peak_voltage_request: metrics.peakVoltageRequest,
    peak_speed: metrics.peakSpeed,
    pp_position: metrics.peakToPeakPosition,
    pp_current: metrics.peakToPeakCurrent,
  }
  for (const [key, figure] of Object.entries(item.expect)) {
    if (!(key in ours)) {
      tally.fail(`${item.id} ${key}: this figure is not known here`)
      continue
    }
    tally.known(`${item.id} ${key}`, figure, ['value', 'tol', 'tol_rel', 'reads', 'routes'])
    tally.figure(`${item.id} ${key}`, figure, ours[key])
  }
}

/** Checks winding heat: control-cases.json `thermal`. */
export function checkThermal(tally: Tally, item: ThermalCase): void {
  const { inputs, id } = item
  tally.known(`${id} inputs`, inputs, ['R_at_25C', 'R_th', 'tau_th', 'C_th', 'T_amb', 'I_continuous', 'I_peak', 'T_max'])
  const node = { R: inputs.R_at_25C, R_th: inputs.R_th, tau_th: inputs.tau_th, T_amb: inputs.T_amb }
  for (const [key, figure] of Object.entries(item.expect)) {
    const name = `${id} ${key}`
    if (key === 'steady_temperature_C') {
      const steady = steadyTemperature(node, inputs.I_continuous)
      tally.figure(name, figure, steady.kind === 'steady' ? steady.celsius : null)
    } else if (key === 'peak_current_time_s') {
      const time = timeToTemperature(node, inputs.I_peak, inputs.T_max)
      tally.figure(name, figure, time.kind === 'time' ? time.seconds : null)
    } else {
      tally.fail(`${name}: this figure is not known here`)
    }
  }
}

/** Inputs and remarks of the closed forms; all else in an entry is a figure. */
const CLOSED_FORM_INPUTS = ['id', 'D', 'plant', 'f_c', 'f_o', 'W', 'bits', 'N', 'encoder', 'K_pv', 'K_iv', 'T', 'T_winding', 'gamma', 'tol', 'routes', 'numeric', 'K_ic_rule', 'note']

/** Checks a closed form, the formula and where there is one the engine too: control-cases.json `closed_forms`. */
export function checkClosedForm(tally: Tally, item: ClosedFormCase): void {
  const number = (key: string): number => item[key] as number
  const T_winding = (item.T_winding as number | undefined) ?? 25
  for (const [key, value] of Object.entries(item)) {
    if (CLOSED_FORM_INPUTS.includes(key)) continue
    const name = `${item.id} ${key}`
    const figure = value as Figure
    switch (key) {
      case 'limit_of_KkT':
        tally.close(name, integratorLimit(number('D')), value as number, number('tol'))
        tally.close(`${name} by eigenvalues`, integratorLimitByEigenvalues(number('D')), value as number, number('tol'))
        break
      case 'a':
        tally.close(name, windingPole(item.plant as Plant, T_winding, 1 / number('f_c')), value as number, 1e-12)
        break
      case 'K_pc_limit': {
        const gamma = (item.gamma as number | undefined) ?? 1
        tally.figure(name, figure, lockedRotorLimit(item.plant as Plant, T_winding, 1 / number('f_c'), number('D'), gamma))
        tally.figure(`${name} by eigenvalues`, figure, lockedLimitByEigenvalues(item.plant as Plant, T_winding, number('f_c'), number('D'), gamma))
        break
      }
      case 'velocity_quantum':
      case 'current_ripple': {
        const plant = { bits: number('bits'), N: item.N ?? 1, encoder: item.encoder ?? 'output' } as Plant
        const quantum = velocityQuantum(plant, { W: number('W'), f_o: number('f_o'), K_pv: item.K_pv ?? 0, K_iv: item.K_iv ?? 0 } as Firmware)
        tally.figure(name, figure, key === 'velocity_quantum' ? quantum.omega : quantum.i)
        break
      }
      case 'lag_s':
        tally.figure(name, figure, windowDelay(number('W'), 1 / number('f_o')))
        break
      case 'factor':
        tally.close(name, resistanceAt(1, number('T')), value as number, number('tol'))
        break
      default:
        tally.fail(`${name}: this figure is not known here`)
    }
  }
}

/** The locked rotor's limit from the verdict itself, K_ic moving with K_pc so that pole and zero cancel. */
function lockedLimitByEigenvalues(plant: Plant, T_winding: number, f_c: number, D: number, gamma: number): number {
  const a = windingPole(plant, T_winding, 1 / f_c)
  const rho = (K_pc: number): number =>
    verdict({
      plant: { ...plant, V_nom: 1 },
      environment: { V_bus: gamma, T_winding },
      firmware: {
        mode: 'current', f_c, f_o: f_c, W: 1, D, K_pp: 0, K_ip: 0, K_pv: 0, K_iv: 0, K_pc, K_ic: cancellingIntegral(K_pc, a, 1 / f_c),
        omega_max: 1, I_max: 1, d_max: 1, supply_compensated: false,
      },
    }).rho
  const scale = lockedRotorLimit(plant, T_winding, 1 / f_c, 0, gamma)
  let low = scale * 1e-3
  let high = scale * 2
  for (let step = 0; step < 60; step++) {
    const middle = 0.5 * (low + high)
    if (rho(middle) < 1) low = middle
    else high = middle
  }
  return 0.5 * (low + high)
}

/** Checks a pair of rates that must be admitted or refused: control-cases.json `refusals`. */
export function checkRefusal(tally: Tally, item: RefusalCase): void {
  const name = `rates ${item.f_c}/${item.f_o}`
  tally.known(name, item, ['f_c', 'f_o', 'p', 'q', 'reads'])
  try {
    const { p, q } = timingOf(item.f_c, item.f_o)
    tally.pass(item.reads.startsWith('admitted'), () => `${name}: admitted where "${item.reads}" is expected`)
    if (item.p !== undefined) tally.same(`${name} p`, p, item.p)
    if (item.q !== undefined) tally.same(`${name} q`, q, item.q)
  } catch (error) {
    if (!(error instanceof NumericError)) throw error
    tally.pass(item.reads.startsWith('refused'), () => `${name}: ${error.message}`)
    if (item.p !== undefined && item.q !== undefined) tally.pass(error.message.includes(`${item.p}/${item.q}`), () => `${name}: the refusal does not state ${item.p}/${item.q}`)
  }
}
