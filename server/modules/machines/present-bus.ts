import type { EntityManager } from '@mikro-orm/core'
import { reservedRanges } from '../../../shared/bus/addresses.ts'
import type { BusView } from '../../../shared/contract/machines.ts'
import { DomainError } from '../../http/errors.ts'
import { changeKey } from '../changes/locate.ts'
import { readSet } from '../changes/read-set.ts'
import { policyInForce } from '../policy/policy-in-force.ts'
import { claimsOn, contestedOn, type OpenSet } from './bus-claims.ts'
import { busPlan } from './bus-plan.ts'
import type { Machine } from './machine.entity.ts'
import { openChanges } from './open-changes.ts'
import { shownWithSchemas } from './shown-set.ts'

/** Open changes whose text can be read; what can't be read claims nothing yet. */
async function openSets(em: EntityManager, machine: Machine): Promise<OpenSet[]> {
  return (await openChanges(em, machine)).flatMap((c) => {
    const read = readSet(c.text)
    return read.ok ? [{ change: changeKey(c), title: c.title, state: c.state, set: read.set }] : []
  })
}

/** @throws DomainError not-found when the shown release has no such bus */
export async function presentBus(em: EntityManager, machine: Machine, key: string): Promise<BusView> {
  const { shown, set, firmware } = await shownWithSchemas(em, machine)
  if (!shown || !Object.hasOwn(set.buses, key)) throw new DomainError('not-found', `${machine.name} has no bus "${key}" in its newest release. Buses come with releases: look at the machine's page, or at its changes.`)
  const open = await openSets(em, machine)
  const claims = claimsOn(key, set, open)
  const joints = Object.entries(set.joints).filter(([, j]) => j.bus === key)
  return {
    machine: machine.key,
    machineName: machine.name,
    shown,
    key,
    settings: set.buses[key],
    ...busPlan(set, key),
    reserved: [...reservedRanges],
    addressBytes: Object.fromEntries(joints.map(([joint, j]) => [joint, (firmware.schemas[j.firmware]?.image.addressWidth ?? 8) / 8])),
    claims,
    contested: contestedOn(key, set, open, claims),
    loadPercent: (await policyInForce(em, machine)).content.busLoadPercent,
  }
}
