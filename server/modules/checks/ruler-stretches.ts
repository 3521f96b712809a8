import type { EntityManager } from '@mikro-orm/core'
import type { AskStretches, MapParameter, Stretch, StretchesView } from '../../../shared/contract/checks.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { request } from '../../jobs/analyses/requests.ts'
import type { Change } from '../changes/change.entity.ts'
import { prepareChange } from './gather-inputs.ts'
import { worded } from './look-at-check.ts'
import { placeOfLetter, roleOfLetter } from './map-parameters.ts'
import { modelled } from './map-stability.ts'

/** Letters whose values lie on rulers of the editor. The task rates are left out: between two sensible ones lie ratios that no board runs. */
const varied = ['K_pp', 'K_ip', 'K_pv', 'K_iv', 'K_pc', 'K_ic', 'W', 'D'] as const satisfies readonly MapParameter[]

/**
 * Where on each ruler asked for the joint would not be stable, all else as the change has it.
 *
 * @throws DomainError invalid-request, not-found, content-invalid, too-many-requests
 */
export async function rulerStretches(services: Services, em: EntityManager, change: Change, { joint, rulers }: AskStretches, asker: number): Promise<StretchesView> {
  rulers.forEach(({ low, high, parameter }, k) => {
    if (low >= high) throw new DomainError('invalid-request', `The ruler of ${parameter} runs from ${low} to ${high}; its low end must lie below its high end. Nothing was computed.`, { fields: [{ pointer: `/rulers/${k}/low`, detail: 'must be below the high end' }] })
  })
  const { check } = await prepareChange(em, change)
  const { prepared, now } = modelled(check, joint)
  const wanted = rulers.flatMap((ruler) => {
    const letter = varied.find((l) => now.schema.byRole.get(roleOfLetter[l]!)?.name === ruler.parameter)
    const perSi = letter && placeOfLetter(check.inputs.candidate, prepared, now, letter)?.perSi
    if (!letter || !perSi) return []
    return [{ parameter: ruler.parameter, perSi, asked: request('stretches', { model: now.model, parameter: letter, low: ruler.low / perSi, high: ruler.high / perSi }) }]
  })
  const known = await services.checks.settle(wanted.map((w) => w.asked), { asker }).catch(worded)
  return {
    joint,
    rulers: wanted.map(({ parameter, perSi, asked }) => {
      const outcome = known.get(asked.hash)
      const found = outcome?.kind === 'result' ? (outcome.result as Stretch[]) : []
      const inUnit = (si: number) => Number((si * perSi).toPrecision(6))
      return { parameter, unstable: found.map(({ from, to }) => ({ from: inUnit(from), to: inUnit(to) })) }
    }),
  }
}
