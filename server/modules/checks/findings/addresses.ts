import { reserved } from '../../../../shared/bus/addresses.ts'
import type { MachineSet } from '../../../../shared/parameters/machine-set.ts'
import type { RawFinding } from './finding.ts'

const hex = (address: number) => `0x${address.toString(16).toUpperCase().padStart(2, '0')}`
const source = 'UM10204, table of reserved addresses and the text under it'

/** Doubled and reserved addresses, bus by bus; other devices of the bus count. */
export function addressFindings(set: MachineSet): RawFinding[] {
  return Object.entries(set.buses).flatMap(([bus, settings]) => {
    const joints = Object.entries(set.joints).filter(([, j]) => j.bus === bus)
    const at = new Map<number, string[]>()
    const put = (address: number, name: string) => at.set(address, [...(at.get(address) ?? []), name])
    for (const device of settings.otherDevices ?? []) put(device.address, device.name)
    for (const [, joint] of joints) put(joint.address, joint.name)
    const findings = joints.flatMap(([key, joint]): RawFinding[] => {
      const shared = at.get(joint.address)!
      const base = { place: bus, joint: key, value: joint.address, limit: null, unit: '', source, pointer: `/joints/${key}/address` }
      const list: RawFinding[] = []
      if (shared.length > 1)
        list.push({ ...base, kind: 'address', level: 'block', text: `${shared.join(' and ')} answer at ${hex(joint.address)} on ${settings.name}.`, remedy: 'Two devices at one address silence the bus; give one of them a free address.' })
      if (reserved(joint.address))
        list.push({ ...base, kind: 'reserved address', level: 'concession needed', text: `${joint.name} has ${hex(joint.address)} on ${settings.name}, which I²C reserves.`, remedy: 'A device of the bus may take it for a command; choose from 0x08 to 0x77, or say in a concession why nothing on this bus does.' })
      return list
    })
    if (joints.length > 0 && findings.length === 0)
      findings.push({ place: bus, kind: 'address', level: 'pass', value: joints.length, limit: null, unit: '', source, text: `${joints.length === 1 ? 'One board has its' : `${joints.length} boards have an`} address of ${joints.length === 1 ? 'its' : 'their'} own on ${settings.name}.`, remedy: '' })
    return findings
  })
}
