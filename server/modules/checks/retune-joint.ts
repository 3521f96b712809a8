import type { EntityManager } from '@mikro-orm/core'
import type { LoopName } from '../../../shared/contract/checks.ts'
import type { AskRetune, RetuneView } from '../../../shared/contract/proposals.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { request, type RetuneInputs } from '../../jobs/analyses/requests.ts'
import type { RetuneResult } from '../../jobs/analyses/retune.ts'
import type { Change } from '../changes/change.entity.ts'
import { figuresOf } from './assemble-check.ts'
import { prepareChange } from './gather-inputs.ts'
import { hereIfQuick, worded } from './look-at-check.ts'
import { modelled } from './map-stability.ts'
import { proposeValues } from './propose-values.ts'
import { numberOf } from './findings/joint-context.ts'

/** Of a person the retune they asked for last. */
export const retuneTopic = (change: Change, person: number) => `retune ${change.id} of ${person}`

/** Sets of gains tried at most. */
const tries = 300
/** Share of the bandwidth that stands, kept where nothing else is asked. */
const keptBandwidth = 0.9

const share = (value: number) => Number(value.toPrecision(3))

/**
 * Searches the gains asked for with the largest worst margin over the tolerances: begun, going on, or done with a proposal. Nothing is applied.
 *
 * @throws DomainError not-found, content-invalid, invalid-request, too-many-requests
 */
export async function retuneJoint(services: Services, em: EntityManager, change: Change, asked: AskRetune, asker: number): Promise<RetuneView> {
  const { check } = await prepareChange(em, change)
  const { prepared, now } = modelled(check, asked.joint)
  asked.gains.forEach(({ gain }, k) => {
    const problem = now.model.firmware[gain] > 0 ? (asked.gains.findIndex((g) => g.gain === gain) < k ? 'stands in the list twice' : null) : 'is 0, and a search by ratios needs a gain above 0: give it a starting value first'
    if (problem) throw new DomainError('invalid-request', `${gain} ${problem}. Nothing was computed.`, { fields: [{ pointer: `/gains/${k}/gain`, detail: problem }] })
  })
  const known = await services.checks.settle([now.asked.nominal], { asker, urgent: true, here: hereIfQuick() }).catch(worded)
  const judged = figuresOf(now, known)
  if (judged.kind !== 'figures') throw new DomainError('content-invalid', `${judged.kind === 'refused' ? judged.text : ''} Nothing was computed.`.trim())
  const bandwidthHz: RetuneInputs['bandwidthHz'] = {}
  for (const [loop, figures] of Object.entries(judged.figures.loops) as [LoopName, { bandwidthHz: number | null }][]) {
    const wanted = asked.bandwidthHz?.[loop] ?? (figures.bandwidthHz === null ? undefined : figures.bandwidthHz * keptBandwidth)
    if (wanted !== undefined) bandwidthHz[loop] = wanted
  }
  const limit = numberOf({ role: now.role }, 'current.limit')
  const { model } = now
  const { step } = now.asked.nominal.inputs
  const inputs: RetuneInputs = {
    model, bounds: now.asked.tolerance?.inputs.bounds ?? [], gains: Object.fromEntries(asked.gains.map((g) => [g.gain, [g.from, g.to]])), bandwidthHz,
    // The step's own peak is kept: a few per cent past the clamp is what the current loop overshoots by.
    peakCurrent: limit === null ? null : { limit: Math.max(limit, judged.figures.step?.peakCurrentA ?? 0), step }, tries,
  }
  const wanted = request('retune', inputs)
  const topic = retuneTopic(change, asker)
  const outcome = (await services.checks.follow(topic, [wanted], asker).catch(worded)).get(wanted.hash)
  const progress = services.checks.progressOf(topic)
  if (!outcome) return { hash: wanted.hash, progress, proposal: null, why: '' }
  if (outcome.kind === 'refused') throw new DomainError('invalid-request', outcome.text, { fields: [{ pointer: '/gains', detail: outcome.text }] })
  const found = outcome.result as RetuneResult
  if (!found.better) return { hash: wanted.hash, progress, proposal: null, why: `None of ${found.tried} sets of gains has a larger worst margin with bandwidth and current kept; the gains stand as they are.` }
  const rule = `worst margin over the corners of ${found.boundsWalked.join(', ') || 'nothing bounded'} from ${share(found.before)} to ${share(found.after)} of 45° and 8 dB`
  const proposal = await proposeValues(services, check, {
    prepared, now, sweep: true, asker, gains: asked.gains.map(({ gain }) => ({ gain, value: found.gains[gain]!, rule, source: 'direct search: Kolda, Lewis & Torczon 2003 (from memory)' })),
  })
  return { hash: wanted.hash, progress, proposal, why: `${found.tried} sets of gains tried; ${found.ended === 'converged' ? 'the search converged' : 'the tries were used up'}.` }
}
