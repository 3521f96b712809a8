import type { BusSettings, DriveTrain, JointSettings, MachineSet, Values } from '../../shared/parameters/machine-set.ts'

/** Dunlin: an invented six-legged mud-flat survey walker, and the drive trains we invented for it. */

const range = (value: number, low: number, high: number) => ({ value, low, high })
/** A value with bounds so many percent below and above. */
const percent = (value: number, below: number, above = below) => range(value, Number((value * (1 - below / 100)).toPrecision(6)), Number((value * (1 + above / 100)).toPrecision(6)))

const bus = (name: string, pullUp: number, picofarads: number): BusSettings => ({
  name, bitRate: 400_000, supply: 3.3, pullUp, capacitance: picofarads * 1e-12, pollingRate: 100, bytesPerTransaction: 10,
})

const legMotor = {
  V_nom: 24, V_bus: range(24, 21, 26.4), R: 1.02, R_on: 0.06, L: 0.00042, k_t: percent(0.0318, 7),
  i_lsb: 0.0016, T_winding: range(25, 15, 105), T_max: 125, T_amb: 25, R_th: 9.4, tau_th: 540, R_th_winding: 2.1, tau_th_winding: 14,
  I_driver: 6, I_sense: 5.2, I_demagnetisation: 11, peak_duty: 4, V_bus_max: 36, C_bus: 0.0022, source_resistance: 0.08,
} satisfies Partial<DriveTrain>

const knee: DriveTrain = {
  ...legMotor, N: 64, eta: 0.8, J_rotor: 4.3e-6, J_load: percent(0.0185, 30, 60), b_rotor: 1.1e-6, b_load: 0.02, tau_c: 0.11, tau_s: 0.15,
  encoder: 'output', bits: 16, tau_gear: 6.6, theta_stop_min: -1.6, theta_stop_max: 1.6, settling_target: 0.2, step: 0.2,
}
const hip: DriveTrain = { ...knee, N: 50, J_load: percent(0.031, 25, 40), tau_gear: 5.4, settling_target: 0.25, theta_stop_min: -1.3, theta_stop_max: 1.3 }
const yaw: DriveTrain = { ...knee, N: 50, J_load: percent(0.024, 25, 40), tau_gear: 5.4, settling_target: 0.3, theta_stop_min: -1.0, theta_stop_max: 1.0 }

const winch: DriveTrain = {
  V_nom: 24, V_bus: range(24, 21, 26.4), R: 0.62, R_on: 0.04, L: 0.00031, k_t: percent(0.0462, 7), N: 26, eta: 0.74,
  J_rotor: 1.9e-5, J_load: percent(0.0042, 30, 120), b_rotor: 4e-6, b_load: 0.015, tau_c: 0.22, tau_s: 0.3, encoder: 'motor', bits: 12,
  i_lsb: 0.003, T_winding: range(25, 5, 100), T_max: 130, T_amb: 20, R_th: 5.2, tau_th: 780, R_th_winding: 1.3, tau_th_winding: 22,
  I_driver: 12, I_sense: 10.5, I_demagnetisation: 24, peak_duty: 6, tau_gear: 9, step: 2, settling_target: 0.3,
}

const legValues = (own: Values): Values => ({ supplyNominal: 24, supplyCompensated: true, currentRate: 16000, outerRate: 2000, outputDelay: 1, dutyLimit: 0.95, pwmCounts: 15000, currentGain: 1.2, currentIntegralGain: 3400, busWatchdog: 250, ...own })

/** Hinge 2.0.0 knew the watchdog by another name; the first release was made on it. */
export const hingeValues = {
  knee: legValues({ positionGain: 36, positionIntegralGain: 0, velocityGain: 3.2, velocityIntegralGain: 24, velocityWindow: 14, speedLimit: 6, currentLimit: 2.6, currentContinuous: 1.4, positionMin: -1.5, positionMax: 1.5, accelerationLimit: 60 }),
  hip: legValues({ positionGain: 30, positionIntegralGain: 0, velocityGain: 4.0, velocityIntegralGain: 30, velocityWindow: 12, speedLimit: 6, currentLimit: 2.8, currentContinuous: 1.4, positionMin: -1.2, positionMax: 1.2, accelerationLimit: 50 }),
  yaw: legValues({ positionGain: 24, positionIntegralGain: 0, velocityGain: 3.4, velocityIntegralGain: 20, velocityWindow: 12, speedLimit: 5, currentLimit: 2.2, currentContinuous: 1.2, positionMin: -0.9, positionMax: 0.9, accelerationLimit: 40 }),
}

export const winchValues: Values = {
  mode: 'velocity', supplyFeedforward: true, currentRate: 15000, outerRate: 4000, outputDelay: 1, speedGain: 2.4, speedIntegral: 0.006, speedWindow: 8, speedLimit: 90, rampLimit: 15,
  currentGain: 0.9, currentIntegral: 0.12, currentLimit: 5, currentContinuous: 2.5, supplyNominal: 24, dutyLimit: 95, busTimeout: 0.5, lineIn: -5, lineOut: 480,
}

const legs = [['fore', 1], ['mid', 2], ['aft', 3]] as const
const addressOf = { L: { yaw: 0x31, hip: 0x32, knee: 0x33 }, R: { yaw: 0x39, hip: 0x3a, knee: 0x3b } } as const
/** Encoder offsets as measured on the boards, degrees. */
const offsets = [12.4, 301.7, 88.2, 40.9, 197.3, 263.5, 5.6, 118.8, 340.2, 71.1, 222.9, 154.4, 93.7, 16.3, 280.6, 333.1, 47.8, 205.2]

function legJoints(): Record<string, JointSettings> {
  const joints: Record<string, JointSettings> = {}
  for (const [busKey, leg] of legs)
    for (const side of ['L', 'R'] as const)
      for (const family of ['yaw', 'hip', 'knee'] as const) {
        const n = Object.keys(joints).length
        const direction = side === 'L' ? 'forward' : 'reverse'
        joints[`${side.toLowerCase()}${leg}-${family}`] = {
          name: `${side}${leg} ${family}`, family, bus: busKey, address: addressOf[side][family], firmware: 'hinge 2.1.0', board: `H-0${260 + n * 5}`,
          values: { encoderOffset: offsets[n], encoderDirection: direction, motorDirection: direction },
        }
      }
  return joints
}

/** Dunlin as it was first released. */
export const dunlin: MachineSet = {
  buses: { fore: bus('fore', 1500, 210), mid: bus('mid', 1500, 180), aft: bus('aft', 1200, 260) },
  families: {
    yaw: { name: 'Yaw', driveTrain: yaw, values: hingeValues.yaw },
    hip: { name: 'Hip', driveTrain: hip, values: hingeValues.hip },
    knee: { name: 'Knee', driveTrain: knee, values: hingeValues.knee },
    winch: { name: 'Winch', driveTrain: winch, values: winchValues },
  },
  joints: {
    ...legJoints(),
    winch: { name: 'winch', family: 'winch', bus: 'aft', address: 0x40, firmware: 'capstan 1.3.0', board: 'S-0041', values: { encoderOffset: 0, encoderSense: 1, motorSense: 1 } },
  },
}
