import type { EntityManager } from '@mikro-orm/core'
import type { Progress } from '../../../shared/contract/checks.ts'
import type { Services } from '../../http/services.ts'
import type { AnalysisRequest } from '../../jobs/analyses/requests.ts'
import { JobEnded } from '../../jobs/job.ts'
import { QueueFull } from '../../jobs/job-board.ts'
import type { StoredOutcome } from '../../jobs/results.ts'
import { timingOf } from '../../control/timing.ts'
import { DomainError } from '../../http/errors.ts'
import type { Change } from '../changes/change.entity.ts'
import { prepareChange } from './gather-inputs.ts'
import { nominalRequests, toleranceRequests, type PreparedCheck } from './prepare-check.ts'

/** What the board calls the sweeps of a change's check. */
export const checkTopic = (change: Change) => `check ${change.id}`

/** At most so many analyses are done in the thread that answers; a few milliseconds each. */
const hereAtMost = 3

/** Joints whose analysis takes a few milliseconds: simple rates, short windows. The others cost up to seconds and go to a worker thread. */
function quick({ kind, inputs }: AnalysisRequest): boolean {
  if (kind !== 'nominal' && kind !== 'curves') return false
  const { f_c, f_o, W } = inputs.model.firmware
  try {
    const { p, q } = timingOf(f_c, f_o)
    return q <= 8 && p <= 64 && W <= 64
  } catch {
    // Refused rates are told quickly.
    return true
  }
}

/** Lets the first few quick ones be done in place. */
export function hereIfQuick(): (asked: AnalysisRequest) => boolean {
  let left = hereAtMost
  return (asked) => quick(asked) && (left -= 1) >= 0
}

/** A board's refusal in words for a person. */
export function worded(error: unknown): never {
  if (error instanceof QueueFull)
    throw new DomainError('too-many-requests', `Too much is being computed: ${error.message}. Everything is kept as it is; wait until what runs is done, or stop it, and ask again.`)
  if (error instanceof JobEnded && error.state === 'failed') throw new DomainError('unexpected', `The check could not be computed. ${error.message}`)
  if (error instanceof JobEnded) throw new DomainError('wrong-state', 'The check was stopped before it was done. Everything is kept as it is; start it again.')
  throw error
}

export interface Look {
  hash: string
  check: PreparedCheck
  known: Map<string, StoredOutcome>
  complete: boolean
  progress: Progress
}

/** A change's check as far as it is: the nominal analyses at once, the sweeps from the store or going on in the background. */
export async function lookAtCheck(services: Services, em: EntityManager, change: Change, asker: number): Promise<Look> {
  const { hash, check } = await prepareChange(em, change)
  const nominal = nominalRequests(check)
  const sweeps = toleranceRequests(check)
  const before = await services.checks.known([...nominal, ...sweeps])
  const known = await services.checks.settle(nominal, { asker, urgent: true, here: hereIfQuick(), before }).catch(worded)
  try {
    for (const [h, outcome] of await services.checks.follow(checkTopic(change), sweeps, asker, before)) known.set(h, outcome)
  } catch (error) {
    if (!(error instanceof QueueFull)) throw error
    return { hash, check, known, complete: false, progress: { done: 0, total: 1, state: 'failed', problem: `The tolerances are not being computed: ${error.message}. Ask again when what runs is done.` } }
  }
  return { hash, check, known, complete: sweeps.every((s) => known.has(s.hash)), progress: services.checks.progressOf(checkTopic(change)) }
}
