import { shown, type RawFinding } from './finding.ts'
import { about, numberOf, type JointContext } from './joint-context.ts'

/** Winding heat at the continuous limit. */
export function windingFindings(c: JointContext): RawFinding[] {
  const heat = c.figures?.heat
  if (!heat || heat.continuousA === null) return []
  const limit = heat.limitCelsius - c.policy.windingReserveK
  const base = { kind: 'winding temperature', value: heat.steadyCelsius, limit, unit: '°C', source: 'server/control/MODEL.md; copper 0.00393/K at 20 °C (IEC 60028)', blame: 'current.continuous' as const }
  const within = `largest current that it bears for ever: ${shown(heat.continuousCurrentA)} A`
  if (heat.steadyCelsius === null)
    return [about(c, { ...base, level: 'concession needed', text: `At the continuous limit of ${shown(heat.continuousA)} A the winding finds no steady temperature: copper's rise outruns the cooling.`, remedy: `The winding burns; lower the continuous limit (${within}).` })]
  const over = heat.steadyCelsius > limit
  return [
    about(c, {
      ...base, level: over ? 'concession needed' : 'pass', text: `At the continuous limit of ${shown(heat.continuousA)} A the winding settles at ${shown(heat.steadyCelsius)} °C; it bears ${shown(heat.limitCelsius)} °C.`,
      remedy: over ? `Less than ${shown(c.policy.windingReserveK)} K is kept in hand for a warm day; lower the continuous limit (${within}).` : '',
    }),
  ]
}

/** How long the peak current lasts from ambient. One thermal node can't say: it has the housing's time constant, ten times too kind. */
export function peakTimeFindings(c: JointContext): RawFinding[] {
  const peak = numberOf(c, 'current.limit')
  if (!c.figures || peak === null) return []
  const { heat } = c.figures
  const duty = c.driveTrain.peak_duty ?? null
  const base = { kind: 'time at peak current', limit: duty, unit: 's', source: 'server/control/MODEL.md, two thermal nodes; IEC 60255-149 cold curve', blame: 'current.limit' as const }
  if (!heat || heat.nodes === 1) {
    const computed = heat && heat.timeAtPeakS !== null ? ` (${shown(heat.timeAtPeakS)} s by the housing's time constant, which is too kind)` : ''
    return [about(c, { ...base, level: 'advise', value: null, text: `not assessed: ${heat ? 'winding time constant missing' : 'thermal data missing'}${computed}.`, remedy: "Give the motor's winding-to-housing resistance and winding time constant; until then nobody knows how long a peak may last." })]
  }
  if (heat.timeAtPeakS === null) return [about(c, { ...base, level: 'pass', value: null, text: `${shown(peak)} A from ${shown(heat.ambientCelsius)} °C ${heat.timeAtPeakReads}.`, remedy: '' })]
  const short = duty !== null && heat.timeAtPeakS < duty
  return [
    about(c, {
      ...base, level: short ? 'advise' : 'pass', value: heat.timeAtPeakS,
      text: `${shown(peak)} A from ${shown(heat.ambientCelsius)} °C may last ${shown(heat.timeAtPeakS)} s${duty === null ? '; no duty is stated' : `; the joint's duty is ${shown(duty)} s`}.`,
      remedy: short ? 'The winding is at its limit before the duty is over; lower the current limit or shorten the duty.' : '',
    }),
  ]
}
