import type { BusView, FamilyView, JointSummary, JointView, MachineView, ParameterValue } from '../../shared/contract/machines.ts'
import type { DriveTrain } from '../../shared/parameters/machine-set.ts'

const yes = { allowed: true } as const

export const driveTrain: DriveTrain = { V_nom: 24, R: { value: 1.02, low: 0.94, high: 1.1 }, L: 0.00042, k_t: 0.0318, N: 64, eta: 0.8, J_rotor: 4.3e-6, J_load: 0.0185, encoder: 'output', bits: 16, i_lsb: 0.0016 }
const busSettings = { name: 'fore', bitRate: 400_000, supply: 3.3, pullUp: 1500, capacitance: 210e-12 }
export const shown = { version: '1.7.0', sequence: 7, withdrawn: false }

export const aJoint = (over: Partial<JointSummary> = {}): JointSummary => ({ key: 'l1-knee', name: 'L1 knee', family: 'knee', familyName: 'Knee', bus: 'fore', address: 0x33, firmware: 'hinge 2.1.0', revision: 12, mode: 'position', ownValues: 0, waiting: [], ...over })

/** Dunlin with two joints of one family on one bus. */
export const aMachine = (over: Partial<MachineView> = {}): MachineView => ({
  key: 'dunlin',
  name: 'Dunlin',
  description: 'six-legged mud-flat survey walker',
  retired: false,
  joints: 2,
  buses: 1,
  currentVersion: '1.7.0',
  openChanges: 1,
  shown,
  currentRelease: { machine: 'dunlin', machineName: 'Dunlin', version: '1.7.0', sequence: 7, state: 'current', title: 'Stiffer knee', change: 'dunlin-47', releasedBy: 'Hedda Lindqvist', releasedAt: '2026-11-12T10:00:00Z', joints: 2 },
  busList: [{ key: 'fore', joints: 2, settings: busSettings, doubled: [] }],
  familyList: [{ key: 'knee', name: 'Knee', joints: 2, driveTrainNumber: 1 }],
  jointList: [aJoint({ waiting: [{ change: 'dunlin-50', state: 'submitted' }] }), aJoint({ key: 'r1-knee', name: 'R1 knee', address: 0x3b, ownValues: 1 })],
  changes: [{ key: 'dunlin-50', machine: 'dunlin', machineName: 'Dunlin', number: 50, title: 'Stiffer hip on landing', state: 'submitted', life: 'signature void', author: 'Mirela Castanho', writers: ['Mirela Castanho'], baseVersion: '1.7.0', alteredAt: '2026-11-30T08:12:00Z' }],
  lastActs: [],
  may: { draftChange: yes, describe: yes, retire: yes },
  ...over,
})

const aValue = (over: Partial<ParameterValue> = {}): ParameterValue => ({
  name: 'velocityGain', value: 2.9, origin: 'joint', title: 'Velocity gain', description: 'Proportional gain.', unit: 'A·s/rad', role: 'velocity.kp', boardBound: false, minimum: 0, maximum: 8, familyValue: 3.2, firmwareDefault: 0.2,
  register: { address: 0x24, encoding: 'q7.24', access: 'rw', bit: null, width: null }, bytes: '6666e602', physical: 2.9000000238418579, errorAbsolute: 2.4e-8, errorRelative: 8.2e-9, ...over,
})

export const aJointView = (): JointView => ({
  ...aJoint({ ownValues: 1 }),
  machine: 'dunlin',
  machineName: 'Dunlin',
  shown,
  settings: { name: 'L1 knee', family: 'knee', bus: 'fore', address: 0x33, firmware: 'hinge 2.1.0', board: 'H-0318', values: { velocityGain: 2.9 } },
  familySettings: { name: 'Knee', driveTrain, values: { velocityGain: 3.2 } },
  busSettings,
  driveTrain,
  driveTrainNumber: 1,
  values: [
    aValue(),
    aValue({ name: 'busAddress', title: 'Bus address', value: 0x33, role: 'bus.address', unit: '', familyValue: null, firmwareDefault: 64, register: { address: 4, encoding: 'u8', access: 'rw', bit: null, width: null }, bytes: '33', errorRelative: 0 }),
    aValue({ name: 'supplyCompensated', title: 'Supply compensation', value: true, origin: 'firmware', unit: '', minimum: null, maximum: null, familyValue: null, firmwareDefault: true, register: { address: 5, encoding: 'u8', access: 'rw', bit: 2, width: 1 }, bytes: 'b4', errorRelative: null }),
  ],
  problems: [],
  imageSha256: 'd'.repeat(64),
  history: [{ revision: 12, release: '1.7.0', sequence: 7, at: '2026-11-12T10:00:00Z', change: 'dunlin-47', title: 'Stiffer knee' }],
})

export const aFamily = (): FamilyView => ({
  machine: 'dunlin', machineName: 'Dunlin', shown, key: 'knee', settings: { name: 'Knee', driveTrain, values: { velocityGain: 3.2 } }, driveTrainNumber: 2,
  driveTrainHistory: [{ number: 1, at: '2026-07-08T09:00:00Z', driveTrain: { ...driveTrain, eta: 0.7 } }, { number: 2, at: '2026-11-12T09:00:00Z', driveTrain }],
  joints: aMachine().jointList,
  values: [{ name: 'velocityGain', title: 'Velocity gain', unit: 'A·s/rad', role: 'velocity.kp', familyValue: 3.2, firmwareDefault: 0.2, own: [{ joint: 'r1-knee', value: 2.9 }] }],
})

export const aBus = (): BusView => ({
  machine: 'dunlin', machineName: 'Dunlin', shown, key: 'fore', settings: busSettings, doubled: [0x33], free: 109, reserved: [{ from: 0, to: 7 }, { from: 0x78, to: 0x7f }], addressBytes: {}, claims: [], contested: [], loadPercent: { advise: 70, block: 100 },
  taps: [{ address: 0x33, joint: 'l1-knee', name: 'L1 knee', reserved: false }, { address: 0x33, joint: null, name: 'depth gauge', reserved: false }, { address: 0x3b, joint: 'r1-knee', name: 'R1 knee', reserved: false }],
})
