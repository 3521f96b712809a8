import type { EntityManager } from '@mikro-orm/core'
import { DomainError, type FieldProblem } from '../../http/errors.ts'
import { Joint } from '../machines/joint.entity.ts'
import type { Machine } from '../machines/machine.entity.ts'
import type { Release } from '../releases/release.entity.ts'
import { serialKey, type Board } from './board.entity.ts'
import { noJoint } from './locate.ts'
import { putOnRecord } from './record-flash.ts'
import type { Speaker } from './speaker.ts'
import { tellOfWithdrawn } from './tell-of-withdrawn.ts'

export interface Pairing {
  joint: string
  serial: string
}

/** A serial number or a joint that stands twice, each told at its place. */
export function doubled(pairs: readonly Pairing[]): FieldProblem[] {
  const problems: FieldProblem[] = []
  const serials = new Map<string, number>()
  const joints = new Map<string, number>()
  pairs.forEach(({ joint, serial }, i) => {
    const [s, j] = [serials.get(serialKey(serial)), joints.get(joint)]
    if (s !== undefined) problems.push({ pointer: `/boards/${i}/serial`, detail: `${serial} stands at ${pairs[s].joint} already` })
    if (j !== undefined) problems.push({ pointer: `/boards/${i}/joint`, detail: `${joint} has ${pairs[j].serial} already` })
    serials.set(serialKey(serial), s ?? i)
    joints.set(joint, j ?? i)
  })
  return problems
}

/**
 * Records one flash for each of many joints: all of them, or none.
 *
 * @throws DomainError invalid-request with a pointer for each doubled serial number or joint, unknown joint; what putOnRecord throws
 */
export async function recordMachine(em: EntityManager, { machine, release, boards }: { machine: Machine; release: Release; boards: readonly Pairing[] }, speaker: Speaker): Promise<Board[]> {
  const problems = doubled(boards)
  if (problems.length > 0) throw new DomainError('invalid-request', `${problems.length === 1 ? 'One board or joint stands' : `${problems.length} boards or joints stand`} twice. Nothing was recorded; correct what is named.`, { fields: problems })
  const joints = new Map((await em.find(Joint, { machine, retiredAt: null })).map((j) => [j.key, j]))
  const recorded: Board[] = []
  for (const [i, { joint, serial }] of boards.entries()) recorded.push(await putOnRecord(em, { machine, joint: joints.get(joint) ?? noJoint(machine, joint, `/boards/${i}/joint`), release, serial, readBack: null }, speaker))
  await tellOfWithdrawn(em, release, recorded, speaker)
  return recorded
}
