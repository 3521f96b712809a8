import type { DriveTrain, MachineSet } from '../../shared/parameters/machine-set.ts'

/** A plausible small leg drive; figures invented. */
export const aDriveTrain = (edit: Partial<DriveTrain> = {}): DriveTrain => ({
  V_nom: 12,
  R: { value: 1.2, low: 1.1, high: 1.3 },
  L: 0.0004,
  k_t: 0.012,
  N: 150,
  eta: 0.75,
  J_rotor: 6e-7,
  J_load: { value: 0.004, low: 0.002, high: 0.008 },
  encoder: 'output',
  bits: 14,
  i_lsb: 0.002,
  ...edit,
})

/** Two knees and a hip of Dunlin on two buses, on the small schema as "hinge 2.1.0". */
export const aSet = (): MachineSet => ({
  buses: {
    port: { name: 'Port legs', bitRate: 400_000, supply: 3.3, pullUp: 2200, capacitance: 120e-12, otherDevices: [{ address: 0x68, name: 'Tilt sensor' }] },
    starboard: { name: 'Starboard legs', bitRate: 400_000, supply: 3.3, pullUp: 2200, capacitance: 120e-12 },
  },
  families: {
    knee: { name: 'Knees', driveTrain: aDriveTrain(), values: { velocityGain: 0.5, currentLimit: 1.8 } },
    hip: { name: 'Hips', driveTrain: aDriveTrain({ N: 200 }), values: { controlMode: 'velocity' } },
  },
  joints: {
    'knee-port': { name: 'Knee port', family: 'knee', bus: 'port', address: 0x20, firmware: 'hinge 2.1.0', board: 'HB-0117', values: { encoderOffset: 0.125, velocityGain: 0.4 } },
    'knee-starboard': { name: 'Knee starboard', family: 'knee', bus: 'starboard', address: 0x20, firmware: 'hinge 2.1.0', values: {} },
    'hip-port': { name: 'Hip port', family: 'hip', bus: 'port', address: 0x21, firmware: 'hinge 2.1.0', values: {} },
  },
})
