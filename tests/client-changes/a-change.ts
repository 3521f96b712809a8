import capstan130 from '../../examples/firmware/capstan-1.3.0.schema.json'
import hinge200 from '../../examples/firmware/hinge-2.0.0.schema.json'
import hinge210 from '../../examples/firmware/hinge-2.1.0.schema.json'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { DriveTrain, MachineSet } from '../../shared/parameters/machine-set.ts'
import { printSet } from '../../shared/parameters/set-text.ts'
import { expectParameterSchema } from '../../shared/registers/read-parameter-schema.ts'

/** The example firmware versions, raw as the API sends them and read. */
export const rawSchemas = { 'hinge 2.0.0': hinge200, 'hinge 2.1.0': hinge210, 'capstan 1.3.0': capstan130 }
export const schemas = Object.fromEntries(Object.entries<unknown>(rawSchemas).map(([name, json]) => [name, expectParameterSchema(json)]))

const driveTrain: DriveTrain = {
  V_nom: 24, R: { value: 1.02, low: 0.94, high: 1.1 }, L: 0.00042, k_t: 0.0318, N: 64, eta: 0.8, J_rotor: 4.3e-6, J_load: { value: 0.0185, low: 0.01295, high: 0.0296 }, encoder: 'output', bits: 16, i_lsb: 0.001,
}

export const aSet = (): MachineSet => ({
  buses: { fore: { name: 'fore', bitRate: 400_000, supply: 3.3, pullUp: 1800, capacitance: 1.2e-10 }, aft: { name: 'aft', bitRate: 400_000, supply: 3.3, pullUp: 1800, capacitance: 1.2e-10 } },
  families: {
    knee: { name: 'Knee', driveTrain, values: { positionGain: 36, velocityGain: 3.2, velocityIntegralGain: 24, velocityWindow: 14, currentLimit: 2.8 } },
    winch: { name: 'Winch', driveTrain: { ...driveTrain, N: 20 }, values: { speedGain: 6.25 } },
  },
  joints: {
    'l1-knee': { name: 'L1 knee', family: 'knee', bus: 'fore', address: 0x33, firmware: 'hinge 2.1.0', values: {} },
    'r3-knee': { name: 'R3 knee', family: 'knee', bus: 'aft', address: 0x3b, firmware: 'hinge 2.1.0', values: { velocityGain: 2.9 } },
    winch: { name: 'winch', family: 'winch', bus: 'aft', address: 0x40, firmware: 'capstan 1.3.0', values: {} },
  },
})

const allowed = { allowed: true } as const

/** A draft of Mirela Castanho on Dunlin, as the API answers it. */
export function aChange(over: Partial<ChangeView> = {}): ChangeView {
  const set = over.set ?? aSet()
  return {
    key: 'dunlin-47', machine: 'dunlin', machineName: 'Dunlin', number: 47, title: 'Stiffer knee for soft mud', state: 'draft', life: 'draft', author: 'Mirela Castanho', writers: ['Mirela Castanho'],
    baseVersion: '1.7.0', alteredAt: '2026-11-28T09:14:00Z', reason: 'The shank sinks.', revision: 3, concessions: [], contentHash: null, text: printSet(set), set, base: aSet(),
    events: [{ kind: 'drafted', person: 'Mirela Castanho', at: '2026-11-28T09:14:00Z', note: '' }], signatures: [], peerReviewsNeeded: 1, concessionRules: { lastDay: '2027-11-28', mostBoards: 200 },
    may: { edit: allowed, submit: allowed, cancel: allowed, return: { allowed: false, why: 'It is a draft.' }, signPeerReview: { allowed: false, why: 'It is a draft.' }, release: { allowed: false, why: 'It is a draft.' }, bringUpToDate: { allowed: false, why: 'It is on the newest release.' }, inviteWriter: allowed, takeBenchImage: allowed },
    ...over,
  }
}
