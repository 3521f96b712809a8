import type { BusClaim, BusView } from '../../../shared/contract/machines.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'

/** An open change with the set it would release. */
export interface OpenSet {
  change: string
  title: string
  state: BusClaim['state']
  set: MachineSet
}

/** Addresses on a bus that open changes give a joint anew: the joint is new, moved, or comes from another bus. */
export function claimsOn(bus: string, released: MachineSet, open: readonly OpenSet[]): BusClaim[] {
  return open.flatMap(({ set, ...change }) =>
    Object.entries(set.joints).flatMap(([joint, j]): BusClaim[] => {
      const before = released.joints[joint]
      return j.bus !== bus || (before?.bus === bus && before.address === j.address) ? [] : [{ ...change, joint, name: j.name, address: j.address }]
    }),
  )
}

/**
 * Addresses that would be doubled once more than one of the changes is released: two changes that put different joints there, or one that
 * puts a joint where the release has another that the change leaves in place, or where another device of the bus answers.
 */
export function contestedOn(bus: string, released: MachineSet, open: readonly OpenSet[], claims: readonly BusClaim[]): BusView['contested'] {
  const sets = new Map(open.map((o) => [o.change, o.set]))
  const addresses = [...new Set(claims.map((c) => c.address))].sort((a, b) => a - b)
  return addresses.flatMap((address) => {
    const at = claims.filter((c) => c.address === address)
    const holder = Object.entries(released.joints).find(([joint, j]) => j.bus === bus && j.address === address && at.some((c) => stays(sets.get(c.change)!, joint, j)))
    const device = (released.buses[bus]?.otherDevices ?? []).find((d) => d.address === address)
    const apart = new Set(at.map((c) => c.joint)).size > 1
    return apart || holder || device ? [{ address, claims: at, holder: holder?.[1].name ?? device?.name ?? null }] : []
  })
}

const stays = (set: MachineSet, joint: string, before: { bus: string; address: number }) => set.joints[joint]?.bus === before.bus && set.joints[joint].address === before.address
