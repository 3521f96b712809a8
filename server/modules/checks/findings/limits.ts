import type { DriveTrain } from '../../../../shared/parameters/machine-set.ts'
import { bounds, nominal } from '../../../../shared/parameters/quantity.ts'
import type { RoleReader } from '../joint-model.ts'
import { shown, type RawFinding } from './finding.ts'

const dataSheet = "the joint's data sheets"

/** The current limit in the registers against what driver, sensor, magnets and gear bear. */
export function limitFindings(place: string, joint: string, d: DriveTrain, role: RoleReader): RawFinding[] {
  const limit = role('current.limit')
  if (typeof limit !== 'number') return []
  const against = (kind: string, rating: number | undefined, what: string, remedy: string): RawFinding[] => {
    if (rating === undefined) return []
    const over = limit > rating
    return [{ place, joint, kind, level: over ? 'block' : 'pass', value: limit, limit: rating, unit: 'A', source: dataSheet, text: `The current limit of ${shown(limit)} A is ${over ? 'above' : 'within'} ${what} of ${shown(rating)} A.`, remedy: over ? remedy : '' }]
  }
  const findings = [
    ...against('current against driver', d.I_driver, "the driver's peak rating", 'The driver can fail short; lower the current limit.'),
    ...against('current against sensor', d.I_sense, "the current sensor's range", 'Beyond its range the loop no longer sees the current; lower the current limit.'),
    ...against('current against magnets', d.I_demagnetisation, 'the demagnetising current', 'The motor would lose torque for good; lower the current limit.'),
  ]
  if (d.tau_gear !== undefined) {
    const k_t = bounds(d.k_t)?.[1] ?? nominal(d.k_t)
    const torque = d.N * k_t * limit
    const over = torque > d.tau_gear
    findings.push({
      place, joint, kind: 'torque against gear', level: over ? 'concession needed' : 'pass', value: torque, limit: d.tau_gear, unit: 'N·m', source: `${dataSheet}; N·k_t·I_max, no credit for losses`,
      text: `At the current limit the gear bears ${shown(torque)} N·m; its rating is ${shown(d.tau_gear)} N·m.`, remedy: over ? 'One stall can strip the gear train; lower the current limit, or say in a concession what keeps the torque away.' : '',
    })
  }
  return findings
}

/** Watchdog, soft limits and recorded directions: what the registers promise about misuse and wiring. */
export function guardFindings(place: string, joint: string, d: DriveTrain, role: RoleReader): RawFinding[] {
  const findings: RawFinding[] = []
  const watchdog = role('bus.watchdog')
  if (watchdog !== null) {
    const on = watchdog !== 0 && watchdog !== false
    findings.push({
      place, joint, kind: 'bus watchdog', level: on ? 'pass' : 'concession needed', value: typeof watchdog === 'number' ? watchdog : null, limit: null, unit: typeof watchdog === 'number' ? 's' : '', source: 'common practice, no source',
      text: on ? 'The bus watchdog is on.' : 'The bus watchdog is off.', remedy: on ? '' : 'When the bus falls silent the joint goes on with its last command; set a time, or say in a concession what stops it.',
    })
  }
  const soft = [role('position.min'), role('position.max')]
  const [low, high] = soft
  if (typeof low === 'number' && typeof high === 'number') {
    const crossed = low >= high
    const outside = (d.theta_stop_min !== undefined && low < d.theta_stop_min) || (d.theta_stop_max !== undefined && high > d.theta_stop_max)
    if (crossed || outside || d.theta_stop_min !== undefined || d.theta_stop_max !== undefined)
      findings.push({
        place, joint, kind: 'soft position limits', level: crossed || outside ? 'block' : 'pass', value: null, limit: null, unit: 'rad', source: 'common practice, no source',
        text: crossed ? `The lower position limit of ${shown(low)} rad is not below the upper one of ${shown(high)} rad.` : outside ? `The position limits ${shown(low)} to ${shown(high)} rad reach past the hard stops.` : `The position limits ${shown(low)} to ${shown(high)} rad lie inside the hard stops.`,
        remedy: crossed || outside ? 'The joint would run into its stop under full current; set both limits inside the stops.' : '',
      })
  }
  return findings
}
