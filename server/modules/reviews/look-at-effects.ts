import type { EntityManager } from '@mikro-orm/core'
import type { EffectsView, RowEffect } from '../../../shared/contract/reviews.ts'
import type { PolicyContent } from '../../../shared/contract/policy.ts'
import type { Services } from '../../http/services.ts'
import type { NominalResult } from '../../jobs/analyses/nominal.ts'
import type { AnalysisRequest } from '../../jobs/analyses/requests.ts'
import type { StoredOutcome } from '../../jobs/results.ts'
import { Recent } from '../../jobs/recent.ts'
import type { Change } from '../changes/change.entity.ts'
import { prepareChange } from '../checks/gather-inputs.ts'
import { worded } from '../checks/look-at-check.ts'
import { diffChange } from './diff-change.ts'
import { figureMoved, type Side } from './figure-moved.ts'
import { planEffects, type RowPlan, type Trial } from './value-alone.ts'

const effectsTopic = (change: Change) => `effects ${change.id}`
const plans = new Recent<RowPlan[]>(16)

type Known = ReadonlyMap<string, StoredOutcome>

const sideOf = (asked: AnalysisRequest & { kind: 'nominal' }, known: Known): Side | string | null => {
  const outcome = known.get(asked.hash)
  if (!outcome) return null
  return outcome.kind === 'refused' ? outcome.text : { figures: (outcome.result as NominalResult).figures, model: asked.inputs.model }
}

function effectOf(plan: RowPlan, known: Known, policy: PolicyContent): RowEffect {
  const { row } = plan
  if (plan.kind === 'none') return { row, kind: 'none', why: plan.why }
  const sides = plan.trials.map((t): [Trial, ReturnType<typeof sideOf>, ReturnType<typeof sideOf>] => [t, sideOf(t.before, known), sideOf(t.after, known)])
  if (sides.some(([, a, b]) => a === null || b === null)) return { row, kind: 'not yet' }
  const refused = sides.flatMap(([, a, b]) => [a, b]).find((s) => typeof s === 'string')
  if (typeof refused === 'string') return { row, kind: 'none', why: refused }
  const moves = sides.flatMap(([t, a, b]) => {
    const found = figureMoved(a as Side, b as Side, policy, t.settlingTarget)
    return found ? [{ joint: t.joint, ...found }] : []
  })
  const [largest] = moves.toSorted((a, b) => b.score - a.score)
  return largest ? { row, kind: 'effect', effect: { ...largest.moved, joint: largest.joint, verdict: largest.verdict } } : { row, kind: 'none', why: 'no figure of the loop moves' }
}

/**
 * What each altered value does alone, as far as it is computed; what is missing goes on in the background and is there when asked again.
 *
 * @throws DomainError too-many-requests
 */
export async function lookAtEffects(services: Services, em: EntityManager, change: Change, asker: number): Promise<EffectsView> {
  const { hash, check } = await prepareChange(em, change)
  let plan = plans.get(hash)
  if (!plan) plans.set(hash, (plan = planEffects(check, await diffChange(em, change))))
  const asked = plan.flatMap((p) => (p.kind === 'trials' ? p.trials.flatMap((t) => [t.before, t.after]) : []))
  const known = await services.checks.follow(effectsTopic(change), asked, asker).catch(worded)
  return { effects: plan.map((p) => effectOf(p, known, check.inputs.policy)), progress: services.checks.progressOf(effectsTopic(change)) }
}
