import type { EntityManager } from '@mikro-orm/core'
import type { AskMap, MapAxisView, MapCells, MapView } from '../../../shared/contract/checks.ts'
import { NumericError } from '../../control/errors.ts'
import type { JointModel } from '../../control/model.ts'
import { parameterNamed, valueOf } from '../../control/parameters.ts'
import { LOG_RATIO } from '../../control/stability-map.ts'
import { DomainError } from '../../http/errors.ts'
import type { Services } from '../../http/services.ts'
import { guardMap, valuesOfAxis } from '../../jobs/analyses/map.ts'
import { request, type AxisInputs } from '../../jobs/analyses/requests.ts'
import type { Change } from '../changes/change.entity.ts'
import { prepareChange } from './gather-inputs.ts'
import { worded } from './look-at-check.ts'
import { placeOfLetter, unitOfLetter } from './map-parameters.ts'
import { jointOf } from './report-joint.ts'
import type { PreparedCheck, PreparedJoint, Side } from './prepare-check.ts'

/** Of a person the map they asked for last; the one before it stops, unless somebody else looks at it. */
export const mapTopic = (change: Change, person: number) => `map ${change.id} of ${person}`

/** A joint that can be analysed, as the change has it. @throws DomainError not-found, content-invalid */
export function modelled(check: PreparedCheck, joint: string): { prepared: PreparedJoint; now: Side & { kind: 'model' } } {
  const prepared = jointOf(check, joint)
  const { now } = prepared
  if (now.kind !== 'model') throw new DomainError('content-invalid', `${joint} can't be analysed as it stands; its check says why. Nothing was computed.`)
  return { prepared, now }
}

const refused = (text: string, pointer: string) => new DomainError('invalid-request', text, { fields: [{ pointer, detail: text }] })

function guarded(asked: AskMap, model: JointModel): void {
  try {
    guardMap({ model, x: asked.x, y: asked.y })
  } catch (error) {
    if (!(error instanceof NumericError)) throw error
    throw refused(error.message, error.details.field === 'x' || error.details.field === asked.x.parameter ? '/x' : '/y')
  }
}

const axisOf = (check: PreparedCheck, joint: PreparedJoint, side: Side & { kind: 'model' }, field: string, axis: AxisInputs & AskMap['x']): MapAxisView => {
  const place = placeOfLetter(check.inputs.candidate, joint, side, axis.parameter)
  return { parameter: axis.parameter, unit: unitOfLetter[axis.parameter], values: valuesOfAxis(field, axis), spacing: axis.low > 0 && axis.high / axis.low > LOG_RATIO ? 'equal ratios' : 'equal steps', pointer: place?.pointer ?? null, perSi: place?.perSi ?? null }
}

/** A stability map over two parameters of a joint: begun, going on, or done. @throws DomainError invalid-request, not-found, too-many-requests */
export async function mapStability(services: Services, em: EntityManager, change: Change, asked: AskMap, asker: number): Promise<MapView> {
  const { check } = await prepareChange(em, change)
  const { prepared, now } = modelled(check, asked.joint)
  guarded(asked, now.model)
  const wanted = request('map', { model: now.model, x: asked.x, y: asked.y })
  const topic = mapTopic(change, asker)
  const outcome = (await services.checks.follow(topic, [wanted], asker).catch(worded)).get(wanted.hash)
  if (outcome?.kind === 'refused') throw refused(`${outcome.text} A cell of the map asked for is no joint; narrow the axis that names it.`, outcome.field === asked.x.parameter ? '/x' : '/y')
  const point = (model: JointModel) => ({ x: valueOf(model, parameterNamed(asked.x.parameter)), y: valueOf(model, parameterNamed(asked.y.parameter)) })
  const has = (model: JointModel) => [asked.x, asked.y].every(({ parameter }) => !(parameter === 'k_s' || parameter === 'd_s') || model.plant[parameter] !== null)
  return {
    hash: wanted.hash,
    joint: asked.joint,
    x: axisOf(check, prepared, now, 'x', asked.x),
    y: axisOf(check, prepared, now, 'y', asked.y),
    progress: services.checks.progressOf(topic),
    cells: outcome ? (outcome.result as MapCells) : null,
    candidate: point(now.model),
    released: prepared.then?.kind === 'model' && has(prepared.then.model) ? point(prepared.then.model) : null,
  }
}
