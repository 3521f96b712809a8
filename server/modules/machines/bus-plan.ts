import type { Tap } from '../../../shared/contract/machines.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import { reserved } from '../checks/findings/addresses.ts'

const addresses = Array.from({ length: 128 }, (_, address) => address)

/** The ranges that I²C keeps for its own uses, ends included. */
export const reservedRanges = addresses.reduce<{ from: number; to: number }[]>((ranges, address) => {
  if (!reserved(address)) return ranges
  const last = ranges.at(-1)
  return last && last.to === address - 1 ? [...ranges.slice(0, -1), { from: last.from, to: address }] : [...ranges, { from: address, to: address }]
}, [])

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
    free: addresses.filter((a) => !reserved(a) && !taken.includes(a)).length,
  }
}
