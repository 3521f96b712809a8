import type { EntityManager } from '@mikro-orm/core'
import type { AskStartingValues, Proposal, RetuneGain, StartingValuesView } from '../../../shared/contract/proposals.ts'
import { NumericError } from '../../control/errors.ts'
import type { JointModel } from '../../control/model.ts'
import { startingValues, type Step, type StartingValues, type Wanted } from '../../control/tuning/starting-values.ts'
import type { Services } from '../../http/services.ts'
import type { Change } from '../changes/change.entity.ts'
import { prepareChange } from './gather-inputs.ts'
import { modelled } from './map-stability.ts'
import { proposeValues, type ProposedGain } from './propose-values.ts'

/** Phase that the delays may cost the velocity loop at its crossover where no bandwidth is asked for, degrees. */
const usualCost = 25
const usualVelocityMargin = 55
const usualCurrentMargin = 65

/** The rules with the bandwidths wanted; what is not said follows from the loop inside. */
function wantedOf(model: JointModel, { bandwidthHz, currentPhaseMarginDeg }: AskStartingValues): Wanted {
  const current: Wanted['current'] = bandwidthHz?.current === undefined ? { rule: 'pole-zero cancellation', phaseMarginDeg: currentPhaseMarginDeg ?? usualCurrentMargin } : { rule: 'pole-zero cancellation', crossoverHz: bandwidthHz.current }
  if (model.firmware.mode === 'current') return { current }
  const trial = startingValues(model, { current, velocity: { rule: 'symmetric optimum', a: 3 }, position: { rule: 'modulus optimum' } })
  const crossoverHz = bandwidthHz?.velocity ?? usualCost / 360 / trial.steps[1].T_sigma
  return { current, velocity: { rule: 'crossover', crossoverHz, phaseMarginDeg: usualVelocityMargin }, position: { rule: 'crossover', crossoverHz: bandwidthHz?.position ?? crossoverHz / 5 } }
}

/** Other published rules for the same joint, to compare with. */
const others: Wanted[] = [
  { current: { rule: 'modulus optimum' }, velocity: { rule: 'symmetric optimum', a: 3 }, position: { rule: 'modulus optimum' } },
  { current: { rule: 'SIMC' }, velocity: { rule: 'SIMC' }, position: { rule: 'SIMC' } },
]

const sources: Record<string, string> = {
  'pole-zero cancellation': 'server/control/MODEL.md, closed forms', crossover: 'loop shaping with every delay counted in', 'modulus optimum': 'Kessler 1955 (from memory)', 'symmetric optimum': 'Kessler 1958 (from memory)', SIMC: 'Skogestad 2003 (from memory)',
}

const words = ({ rule, T_sigma }: Step): string => `${rule}, delays of ${(T_sigma * 1e3).toPrecision(3)} ms counted in`

const gainsOf = ({ steps }: StartingValues): ProposedGain[] =>
  steps.flatMap((step) => Object.entries(step.gains).map(([gain, value]) => ({ gain: gain as RetuneGain, value: value as number, rule: words(step), source: sources[step.rule] ?? '' })))

/** Gains to start from, as edits with their own check; none is applied. @throws DomainError not-found, content-invalid */
export async function proposeStartingValues(services: Services, em: EntityManager, change: Change, asked: AskStartingValues, asker: number): Promise<StartingValuesView> {
  const { check } = await prepareChange(em, change)
  const { prepared, now } = modelled(check, asked.joint)
  const propose = (wanted: Wanted) => proposeValues(services, check, { prepared, now, gains: gainsOf(startingValues(now.model, wanted)), sweep: false, asker })
  try {
    const proposal = await propose(wantedOf(now.model, asked))
    const compared: Omit<Proposal, 'findings'>[] = []
    for (const wanted of others) {
      const { findings: _findings, ...other } = await propose(wanted)
      compared.push(other)
    }
    return { kind: 'proposed', proposal, others: compared }
  } catch (error) {
    if (!(error instanceof NumericError)) throw error
    return { kind: 'none', why: error.message }
  }
}
