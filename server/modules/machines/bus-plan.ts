import { ADDRESSES, reserved } from '../../../shared/bus/addresses.ts'
import type { Tap } from '../../../shared/contract/machines.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'

export interface BusPlan {
  taps: Tap[]
  doubled: number[]
  free: number
}

/** What answers on a bus of the set, by address: the machine's joints and the bus's other devices. */
export function busPlan(set: MachineSet, bus: string): BusPlan {
  const joints = Object.entries(set.joints).flatMap(([joint, j]) => (j.bus === bus ? [{ address: j.address, joint, name: j.name }] : []))
  const others = (set.buses[bus].otherDevices ?? []).map((d) => ({ address: d.address, joint: null, name: d.name }))
  const taps = [...joints, ...others].sort((a, b) => a.address - b.address).map((t) => ({ ...t, reserved: reserved(t.address) }))
  const taken = taps.map((t) => t.address)
  return {
    taps,
    doubled: [...new Set(taken.filter((a, i) => taken.indexOf(a) !== i))],
    free: ADDRESSES.filter((a) => !reserved(a) && !taken.includes(a)).length,
  }
}
