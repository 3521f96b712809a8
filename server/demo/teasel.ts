import type { DriveTrain, JointSettings, MachineSet, Values } from '../../shared/parameters/machine-set.ts'

/** Teasel: an invented seed-sorting arm, and the drive trains we invented for it. */

const range = (value: number, low: number, high: number) => ({ value, low, high })
const percent = (value: number, below: number, above = below) => range(value, Number((value * (1 - below / 100)).toPrecision(6)), Number((value * (1 + above / 100)).toPrecision(6)))

const arm: DriveTrain = {
  V_nom: 24, V_bus: range(24, 22.8, 25.2), R: 1.9, R_on: 0.08, L: 0.0007, k_t: percent(0.0385, 7), N: 80, eta: 0.75,
  J_rotor: 3.1e-6, J_load: percent(0.042, 20, 40), b_rotor: 9e-7, b_load: 0.03, tau_c: 0.14, tau_s: 0.2, encoder: 'output', bits: 16,
  i_lsb: 0.0012, T_winding: range(25, 15, 95), T_max: 120, T_amb: 22, R_th: 12, tau_th: 480, R_th_winding: 3, tau_th_winding: 12,
  I_driver: 6, I_sense: 4.1, I_demagnetisation: 8, tau_gear: 8.4, theta_stop_min: -2.6, theta_stop_max: 2.6, settling_target: 0.35, step: 0.15, peak_duty: 3,
}
const wrist: DriveTrain = { ...arm, R: 6.8, L: 0.0011, k_t: percent(0.0214, 7), N: 60, J_rotor: 9e-7, J_load: percent(0.0026, 20, 60), b_load: 0.008, tau_c: 0.04, tau_s: 0.06, tau_gear: 2.4, settling_target: 0.2 }
const roller: DriveTrain = {
  V_nom: 24, V_bus: range(24, 22.8, 25.2), R: 0.9, R_on: 0.04, L: 0.00044, k_t: percent(0.041, 7), N: 12, eta: 0.86,
  J_rotor: 1.2e-5, J_load: percent(0.0031, 10, 150), b_rotor: 3e-6, b_load: 0.006, tau_c: 0.05, encoder: 'motor', bits: 12,
  i_lsb: 0.002, T_winding: range(25, 15, 90), T_max: 120, T_amb: 22, R_th: 7.5, tau_th: 600, R_th_winding: 2, tau_th_winding: 18,
  I_driver: 12, I_sense: 9, I_demagnetisation: 16, tau_gear: 4, step: 3, settling_target: 0.4, peak_duty: 5,
}

const common: Values = { supplyNominal: 24, supplyCompensated: true, currentRate: 16000, outerRate: 2000, outputDelay: 1, dutyLimit: 0.95, pwmCounts: 15000, busWatchdog: 100 }
const joint = (name: string, family: string, address: number, board: string, encoderOffset: number): JointSettings => ({
  name, family, bus: 'arm', address, firmware: 'hinge 2.1.0', board, values: { encoderOffset, encoderDirection: 'forward', motorDirection: 'forward' },
})

/** Teasel as it was first released. */
export const teasel: MachineSet = {
  buses: { arm: { name: 'arm', bitRate: 400_000, supply: 3.3, pullUp: 1800, capacitance: 150e-12, pollingRate: 100, bytesPerTransaction: 10, otherDevices: [{ address: 0x48, name: 'hopper thermometer' }] } },
  families: {
    arm: { name: 'Arm', driveTrain: arm, values: { ...common, positionGain: 22, positionIntegralGain: 0, velocityGain: 3.0, velocityIntegralGain: 18, velocityWindow: 12, speedLimit: 3, currentGain: 2.2, currentIntegralGain: 6000, currentLimit: 2, currentContinuous: 1, positionMin: -2.4, positionMax: 2.4, accelerationLimit: 30 } },
    wrist: { name: 'Wrist', driveTrain: wrist, values: { ...common, positionGain: 32, positionIntegralGain: 0, velocityGain: 0.9, velocityIntegralGain: 8, velocityWindow: 12, speedLimit: 6, currentGain: 3.2, currentIntegralGain: 20000, currentLimit: 1.2, currentContinuous: 0.5, positionMin: -2, positionMax: 2, accelerationLimit: 80 } },
    roller: { name: 'Belt roller', driveTrain: roller, values: { mode: 'velocity', supplyFeedforward: true, currentRate: 15000, outerRate: 4000, outputDelay: 1, speedGain: 1.8, speedIntegral: 0.005, speedWindow: 8, speedLimit: 120, rampLimit: 25, currentGain: 1.2, currentIntegral: 0.16, currentLimit: 4, currentContinuous: 2.2, supplyNominal: 24, dutyLimit: 95, busTimeout: 0.4, lineIn: -2000, lineOut: 2000 } },
  },
  joints: {
    turn: joint('turn', 'arm', 0x10, 'H-0401', 14.2),
    shoulder: joint('shoulder', 'arm', 0x11, 'H-0402', 201.5),
    elbow: joint('elbow', 'arm', 0x12, 'H-0403', 77.7),
    pitch: joint('wrist pitch', 'wrist', 0x13, 'H-0404', 310.4),
    roll: joint('wrist roll', 'wrist', 0x14, 'H-0405', 129),
    belt: { name: 'belt roller', family: 'roller', bus: 'arm', address: 0x20, firmware: 'capstan 1.3.0', board: 'S-0050', values: { encoderOffset: 0, encoderSense: 1, motorSense: 1 } },
  },
}
