import type { Role } from '../../../../shared/registers/roles.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, type JointContext } from './joint-context.ts'

const source = 'common practice, no source'

function watchdog(c: JointContext): RawFinding[] {
  const value = c.role('bus.watchdog')
  if (value === null) return []
  const on = value !== 0 && value !== false
  const number = typeof value === 'number'
  return [
    about(c, {
      kind: 'bus watchdog', level: on ? 'pass' : 'concession needed', value: number ? value : null, limit: null, unit: number ? 's' : '', source, blame: 'bus.watchdog', text: on ? 'The bus watchdog is on.' : 'The bus watchdog is off.',
      remedy: on ? '' : 'When the bus falls silent the joint goes on with its last command; set a time, or say in a concession what stops it.',
    }),
  ]
}

function softLimits(c: JointContext): RawFinding[] {
  const [low, high] = [c.role('position.min'), c.role('position.max')]
  if (typeof low !== 'number' || typeof high !== 'number') return []
  const { theta_stop_min: stopLow, theta_stop_max: stopHigh } = c.driveTrain
  const crossed = low >= high
  const outside = (stopLow !== undefined && low < stopLow) || (stopHigh !== undefined && high > stopHigh)
  if (!crossed && stopLow === undefined && stopHigh === undefined) return []
  const bad = crossed || outside
  const text = crossed
    ? `The lower position limit of ${shown(low)} rad is not below the upper one of ${shown(high)} rad.`
    : `The position limits ${shown(low)} to ${shown(high)} rad ${outside ? 'reach past' : 'lie inside'} the hard stops.`
  return [about(c, { kind: 'soft position limits', level: bad ? 'block' : 'pass', value: null, limit: null, unit: 'rad', source, blame: stopHigh !== undefined && high > stopHigh ? 'position.max' : 'position.min', text, remedy: bad ? 'The joint would run into its stop under full current; set both limits inside the stops.' : '' })]
}

const directions: readonly [Role, string][] = [['encoder.direction', 'encoder'], ['motor.direction', 'motor']]

/** Directions against what the base release recorded for the same board: wiring does not turn round by itself. */
function recordedDirections(c: JointContext): RawFinding[] {
  const { recorded } = c
  if (!recorded || c.board === null || recorded.board !== c.board) return []
  const known = directions.filter(([role]) => c.role(role) !== null && recorded.role(role) !== null)
  if (known.length === 0) return []
  const turned = known.filter(([role]) => c.role(role) !== recorded.role(role))
  const base = { kind: 'directions', value: null, limit: null, unit: '', source }
  const words = known.map(([, name]) => name).join(' and ')
  if (turned.length === 0) return [about(c, { ...base, level: 'pass', text: `The ${words} direction${known.length === 1 ? ' is' : 's are'} as recorded for board ${c.board}.`, remedy: '' })]
  return [
    about(c, {
      ...base, level: 'block', blame: turned[0][0], text: `The ${turned.map(([, name]) => name).join(' and ')} direction differs from what was recorded for board ${c.board}.`,
      remedy: 'With one direction wrong the loop drives the joint away from its target; take it back, or name the board whose wiring was measured.',
    }),
  ]
}

/** Watchdog, soft limits and recorded directions: what the registers promise about misuse and wiring. */
export const guardFindings = (c: JointContext): RawFinding[] => [...watchdog(c), ...softLimits(c), ...recordedDirections(c)]
