import type { BusSettings, MachineSet } from '../../../../shared/parameters/machine-set.ts'
import type { PolicyContent } from '../../../../shared/contract/policy.ts'
import { shown, type RawFinding } from './finding.ts'

/** Bits on the wire of one read of a board: start, address, register address, repeated start, address, data, stop; nine clocks a byte, ACK included. */
export const bitsPerRead = (bytes: number, addressBytes: number): number => 3 + 9 * (2 + addressBytes + bytes)

/** Pull-up window of a bus mode. Sources: UM10204 tables of electrical characteristics: I_OL at V_OL, rise time. */
const modes = [
  { upTo: 100_000, name: 'Standard-mode', I_OL: 0.003, t_r: 1000e-9 },
  { upTo: 400_000, name: 'Fast-mode', I_OL: 0.003, t_r: 300e-9 },
  { upTo: 1_000_000, name: 'Fast-mode Plus', I_OL: 0.02, t_r: 120e-9 },
] as const

/** R_p(min) = (V_DD − V_OL)/I_OL and R_p(max) = t_r/(0.8473·C_b), Ω; null above Fast-mode Plus, whose buses are driven otherwise. */
export function pullUpWindow({ bitRate, supply, capacitance }: Pick<BusSettings, 'bitRate' | 'supply' | 'capacitance'>): { mode: string; low: number; high: number } | null {
  const mode = modes.find((m) => bitRate <= m.upTo)
  if (!mode) return null
  const V_OL = supply > 2 ? 0.4 : 0.2 * supply
  return { mode: mode.name, low: (supply - V_OL) / mode.I_OL, high: mode.t_r / (0.8473 * capacitance) }
}

function load(key: string, bus: BusSettings, addressBytes: readonly number[], policy: PolicyContent): RawFinding[] {
  if (bus.pollingRate === undefined || bus.bytesPerTransaction === undefined) return []
  const { pollingRate, bytesPerTransaction } = bus
  const bits = addressBytes.reduce((sum, a) => sum + bitsPerRead(bytesPerTransaction, a), 0)
  const value = ((bits * pollingRate) / bus.bitRate) * 100
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
