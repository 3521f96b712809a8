import { bounds } from '../../../../shared/parameters/quantity.ts'
import { resistanceAt } from '../../../control/plant.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, numberOf, type JointContext } from './joint-context.ts'

const lowest = (c: JointContext): number => bounds(c.driveTrain.V_bus)?.[0] ?? c.model!.environment.V_bus

/** Steady speed under full duty at the lowest supply, friction included; torque may end it before the voltage does. */
function reachable(c: JointContext): number {
  const { plant, firmware, environment } = c.model!
  const volts = firmware.d_max * lowest(c)
  const R = resistanceAt(plant.R, environment.T_winding) + plant.R_on
  const perAmp = plant.eta * plant.N * plant.k_t
  const drag = plant.b_load + plant.eta * plant.N * plant.N * plant.b_rotor
  const byVoltage = (volts - (R * plant.tau_c) / perAmp) / (plant.N * plant.k_e + (R * drag) / perAmp)
  const byTorque = drag > 0 ? (perAmp * firmware.I_max - plant.tau_c) / drag : Infinity
  return Math.max(0, Math.min(byVoltage, byTorque))
}

/** The speed limit: reachable at the lowest supply, and seen rightly by the velocity window. */
export function speedFindings(c: JointContext): RawFinding[] {
  const omega = numberOf(c, 'speed.limit')
  if (!c.model || omega === null || c.model.firmware.mode === 'current') return []
  const speed = reachable(c)
  const level = speed < omega ? 'advise' : 'pass'
  const findings = [
    about(c, {
      kind: 'reachable speed', level, value: speed, limit: omega, unit: 'rad/s', source: 'steady state of the model (server/control/MODEL.md)', blame: 'speed.limit',
      text: `At ${shown(lowest(c))} V the joint reaches ${shown(speed)} rad/s; its speed limit is ${shown(omega)} rad/s.`, remedy: level === 'pass' ? '' : 'On a low supply the loops wind up against the voltage; lower the speed limit.',
    }),
  ]
  const { plant, firmware } = c.model
  const turn = (2 * Math.PI) / (plant.encoder === 'motor' ? plant.N : 1)
  const moved = (omega * firmware.W) / firmware.f_o
  const aliased = moved >= turn / 2
  findings.push(
    about(c, {
      kind: 'window turns', level: aliased ? 'block' : 'pass', value: moved / turn, limit: 0.5, unit: 'encoder turns', source: 'aliasing of the window: a difference of half a turn has no sign', blame: 'velocity.window',
      text: `At the speed limit the encoder moves ${shown(moved / turn)} turns within the velocity window.`, remedy: aliased ? 'The window takes a fast turn for one backwards and drives the joint away; shorten it or lower the speed limit.' : '',
    }),
  )
  return findings
}
