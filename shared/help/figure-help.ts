import { findingHelp } from './finding-help.ts'
import { model, type HelpTopic } from './topic.ts'

const step = model('simulation')

/** What each figure of a check and a report is. */
export const figureHelp: Record<string, HelpTopic> = {
  phase: findingHelp['phase margin'],
  gain: findingHelp['gain margin'],
  'sensitivity peak': findingHelp['sensitivity peak'],
  bandwidth: { title: 'Bandwidth', text: 'Frequency up to which a loop follows its reference: where its response first falls 3 dB below what it is at rest.', formula: '|T| = 10^(−3/20) of its value at zero frequency', source: model('margins') },
  rho: { title: 'ρ and slowest', text: 'ρ is the factor by which a disturbance shrinks over one pattern of ticks; the slowest time constant says how long the longest-lived part of it lasts.', formula: 'τ = −T_h/ln ρ', source: model('stability') },
  'delay margin': { title: 'Delay margin', text: 'Further delay a loop bears, in time and in its own ticks.', formula: 'least lag to −1 over ω, where |λ(L)| = 1', source: model('margins') },
  poles: { title: 'Poles', text: 'Eigenvalues over one pattern of ticks. Inside the circle they die out; their frequency is known only up to multiples of the pattern’s rate.', formula: 'decay −ln|z|/T_h; frequency arg z/(2π·T_h)', source: model('stability') },
  'worst corner': { title: 'Worst corner', text: 'The corner of the tolerances with the smallest margin, margins taken as shares of 45° and 8 dB.', source: model('tolerance and maps') },
  'rise, 10 to 90 %': { title: 'Rise time', text: 'From 10 to 90 % of the commanded step, on the true output angle.', source: step },
  overshoot: findingHelp.overshoot,
  'settling, 2 %': findingHelp.settling,
  'final error': findingHelp['final error'],
  'peak current': { title: 'Peak current', text: 'Largest current in the simulated step.', source: step },
  'RMS current': { title: 'RMS current', text: 'Root of the mean square of the current over the simulated step: what heats the winding.', source: step },
  'peak request': { title: 'Peak request', text: 'Largest voltage that the current law asked for, before the clamp.', source: step },
  'peak speed': { title: 'Peak speed', text: 'Fastest output speed in the simulated step.', source: step },
  'ripple at the end': findingHelp['limit cycle'],
  'current ripple': { title: 'Current ripple', text: 'Peak to peak of the current over the last fifth of the simulated step.', source: step },
}
