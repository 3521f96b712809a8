import { bounds, nominal } from '../../../../shared/parameters/quantity.ts'
import { cornerWords } from './corner-words.ts'
import { shown, type RawFinding } from './finding.ts'
import { about, numberOf, type JointContext } from './joint-context.ts'

const dataSheet = "the joint's data sheets"

/** The largest current to reckon with: the registers' limit, or the simulated peak where it goes past. */
function largest(c: JointContext): { value: number; words: string } | null {
  const limit = numberOf(c, 'current.limit')
  const t = c.figures?.tolerance ?? null
  const nominalPeak = c.figures?.step?.peakCurrentA ?? 0
  const worst = t?.peakCurrentA ?? null
  const peak = Math.max(nominalPeak, worst?.value ?? 0)
  if (limit === null && peak === 0) return null
  if (limit !== null && limit >= peak) return { value: limit, words: `The current limit of ${shown(limit)} A` }
  const where = t && worst && worst.value >= nominalPeak ? ` at the worst of ${t.stepsRun} corners run (${cornerWords(t, worst.at)})` : ''
  return { value: peak, words: `The simulated step's peak of ${shown(peak)} A${where}` }
}

/** Peak current against what driver, sensor and magnets bear, and the torque it makes against the gear. */
export function currentFindings(c: JointContext): RawFinding[] {
  const { driveTrain: d } = c
  const peak = largest(c)
  if (!peak) return []
  const against = (kind: string, rating: number | undefined, what: string, remedy: string): RawFinding[] => {
    if (rating === undefined) return []
    const over = peak.value > rating
    return [about(c, { kind, level: over ? 'block' : 'pass', value: peak.value, limit: rating, unit: 'A', source: dataSheet, blame: 'current.limit', text: `${peak.words} is ${over ? 'above' : 'within'} ${what} of ${shown(rating)} A.`, remedy: over ? remedy : '' })]
  }
  return [
    ...against('current against driver', d.I_driver, "the driver's peak rating", 'The driver can fail short; lower the current limit.'),
    ...against('current against sensor', d.I_sense, "the current sensor's range", 'Beyond its range the loop no longer sees the current; lower the current limit.'),
    ...against('current against magnets', d.I_demagnetisation, 'the demagnetising current', 'The motor would lose torque for good; lower the current limit.'),
    ...gear(c),
  ]
}

function gear(c: JointContext): RawFinding[] {
  const { driveTrain: d } = c
  const limit = numberOf(c, 'current.limit')
  if (d.tau_gear === undefined || limit === null) return []
  const torque = d.N * (bounds(d.k_t)?.[1] ?? nominal(d.k_t)) * limit
  const over = torque > d.tau_gear
  return [
    about(c, {
      kind: 'torque against gear', level: over ? 'concession needed' : 'pass', value: torque, limit: d.tau_gear, unit: 'N·m', source: `${dataSheet}; N·k_t·I_max, no credit for losses`, blame: 'current.limit',
      text: `At the current limit the gear bears ${shown(torque)} N·m; its rating is ${shown(d.tau_gear)} N·m.`, remedy: over ? 'One stall can strip the gear train; lower the current limit, or say in a concession what keeps the torque away.' : '',
    }),
  ]
}

/** The step of the PWM in current against the step of the current sensor. */
export function pwmFindings(c: JointContext): RawFinding[] {
  const counts = numberOf(c, 'pwm.counts')
  if (counts === null || counts <= 0) return []
  const { driveTrain: d } = c
  const volts = d.V_bus === undefined ? d.V_nom : nominal(d.V_bus)
  const value = volts / counts / (nominal(d.R) + (d.R_on === undefined ? 0 : nominal(d.R_on)))
  const level = value < d.i_lsb ? 'pass' : 'advise'
  return [
    about(c, {
      kind: 'PWM step', level, value: value * 1e3, limit: d.i_lsb * 1e3, unit: 'mA', source: 'Peterchev & Sanders 2003: the actuator finer than the sensor', blame: 'pwm.counts',
      text: `One step of the PWM moves the current by ${shown(value * 1e3)} mA; the sensor's step is ${shown(d.i_lsb * 1e3)} mA.`,
      remedy: level === 'pass' ? '' : 'No duty fits between two readings, so the current hunts; take more PWM counts or a coarser sensor.',
    }),
  ]
}
