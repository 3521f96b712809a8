import { busLoad } from '../../../../shared/bus/load.ts'
import { pullUpWindow } from '../../../../shared/bus/pull-up.ts'
import type { BusSettings, MachineSet } from '../../../../shared/parameters/machine-set.ts'
import type { PolicyContent } from '../../../../shared/contract/policy.ts'
import { shown, type RawFinding } from './finding.ts'

function load(key: string, bus: BusSettings, addressBytes: readonly number[], policy: PolicyContent): RawFinding[] {
  if (bus.pollingRate === undefined || bus.bytesPerTransaction === undefined) return []
  const { pollingRate, bytesPerTransaction } = bus
  const value = busLoad({ bitRate: bus.bitRate, pollingRate, bytesPerTransaction, addressBytes }).share * 100
  const { advise, block } = policy.busLoadPercent
  const level = value > block ? 'block' : value > advise ? 'advise' : 'pass'
  return [
    {
      place: key, kind: 'bus load', level, value, limit: level === 'block' ? block : advise, unit: '%', source: 'UM10204 bit timing, nine clocks a byte', ...(level === 'pass' ? {} : { pointer: `/buses/${key}/pollingRate` }),
      text: `Reading ${addressBytes.length === 1 ? 'one board' : `${addressBytes.length} boards`} ${shown(pollingRate)} times a second takes ${shown(value)} % of ${bus.name}.`,
      remedy: level === 'pass' ? '' : 'Commands wait behind the polling; poll less often, read fewer bytes, or raise the bit rate.',
    },
  ]
}

function pullUp(key: string, bus: BusSettings): RawFinding[] {
  const window = pullUpWindow(bus)
  if (!window) return []
  const { low, high } = window
  const inside = bus.pullUp >= low && bus.pullUp <= high
  return [
    {
      place: key, kind: 'pull-up', level: inside ? 'pass' : 'advise', value: bus.pullUp, limit: bus.pullUp < low ? low : high, unit: 'Ω', source: 'UM10204 §7.1; example: TI SLVA689', ...(inside ? {} : { pointer: `/buses/${key}/pullUp` }),
      text:
        low > high
          ? `No pull-up serves ${bus.name}: drivers need at least ${shown(low)} Ω, the rise time at most ${shown(high)} Ω (${window.mode}).`
          : `The pull-up of ${shown(bus.pullUp)} Ω on ${bus.name} is ${inside ? 'inside' : 'outside'} ${shown(low)} to ${shown(high)} Ω (${window.mode}).`,
      remedy: inside ? '' : bus.pullUp < low ? 'Drivers can\'t pull the line low enough; take a larger pull-up.' : 'The line rises too slowly to be read; take a smaller pull-up, less capacitance or a lower bit rate.',
    },
  ]
}

/** Load and pull-up of each bus. */
export function busFindings(set: MachineSet, policy: PolicyContent, addressBytesOf: (joint: string) => number): RawFinding[] {
  return Object.entries(set.buses).flatMap(([key, bus]) => {
    const joints = Object.keys(set.joints).filter((j) => set.joints[j].bus === key)
    return joints.length === 0 ? [] : [...load(key, bus, joints.map(addressBytesOf), policy), ...pullUp(key, bus)]
  })
}
