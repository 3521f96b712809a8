import { bounds, nominal } from '../../../../shared/parameters/quantity.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, numberOf, type JointContext } from './joint-context.ts'

/** Voltage of a supply that can't sink what a joint feeds back when it stops from its speed limit; without losses, this joint alone. */
export function brakingFindings(c: JointContext): RawFinding[] {
  const { driveTrain: d } = c
  const omega = numberOf(c, 'speed.limit')
  if (d.C_bus === undefined || d.V_bus_max === undefined || omega === null) return []
  const volts = bounds(d.V_bus)?.[1] ?? (d.V_bus === undefined ? d.V_nom : nominal(d.V_bus))
  const energy = 0.5 * (nominal(d.J_load) + d.N * d.N * nominal(d.J_rotor)) * omega * omega
  const value = Math.sqrt(volts * volts + (2 * energy) / d.C_bus)
  const over = value > d.V_bus_max
  return [
    about(c, {
      kind: 'braking', level: over ? 'advise' : 'pass', value, limit: d.V_bus_max, unit: 'V', source: 'energy balance of rotor and load against the capacitance of the supply', blame: 'speed.limit',
      text: `Stopping from ${shown(omega)} rad/s feeds back ${shown(energy)} J, which lifts the supply from ${shown(volts)} to ${shown(value)} V; ${shown(d.V_bus_max)} V are borne.`,
      remedy: over ? 'The driver sees more than it bears; lower the speed limit, add capacitance or a brake resistor.' : '',
    }),
  ]
}
