import type { EntityManager } from '@mikro-orm/core'
import type { BenchTask, BoardState } from '../../../shared/contract/boards.ts'
import { Machine } from '../machines/machine.entity.ts'
import { may, type HeldRole } from '../people/permissions.ts'
import { presentMachineBoards } from './present-machine-boards.ts'

/** What is most pressing first. */
const order: readonly BoardState[] = ['withdrawn release on board', 'read-back differs', 'bench set on board', 'not calibrated for this joint', 'outdated', 'unknown', 'current']

/** Joints whose boards are not current, on machines where this person may record, most pressing first. */
export async function presentBenchTasks(em: EntityManager, held: readonly HeldRole[]): Promise<BenchTask[]> {
  const machines = (await em.find(Machine, { retiredAt: null }, { orderBy: { name: 'asc' } })).filter((m) => may(held, 'record flashes', m.key).allowed)
  const tasks: BenchTask[] = []
  for (const machine of machines) {
    const { joints, current, machineName } = await presentMachineBoards(em, machine, held)
    for (const j of joints)
      if (j.state !== 'current') tasks.push({ machine: machine.key, machineName, joint: j.joint, name: j.name, bus: j.bus, address: j.address, serial: j.board?.serial ?? null, state: j.state, why: j.why, flash: current?.version ?? null })
  }
  return tasks.sort((a, b) => order.indexOf(a.state) - order.indexOf(b.state))
}
