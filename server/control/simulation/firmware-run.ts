/**
 * The firmware's two tasks over the drive train, tick by tick: control-model.md §2 with everything §6 adds.
 *
 * Ticks are counted in whole units of T_c/q = T_o/p, so that coinciding ticks coincide exactly.
 */
import type { Firmware } from '../model.ts'
import type { Drive } from './drive.ts'
import type { Reference } from './profiles.ts'
import type { Supply } from './supply.ts'
import { appliedVoltage, busVoltage, requestLimit } from './supply.ts'
import type { Record } from './traces.ts'

export interface RunOptions {
  firmware: Firmware
  drive: Drive
  reference: Reference
  supply: Supply
  /** f_c/f_o in lowest terms. */
  p: number
  q: number
  /** Encoder on the motor side. */
  encoderOnMotor: boolean
  /** Step of the encoder (rad) and of the current sensor (A); 0 for no quantisation. */
  encoderStep: number
  currentStep: number
  sensorDelay: number
  outerDelay: number
}

/** Runs ticks 0 … record.count − 1 of the current task and fills `record`. */
export function runFirmware(options: RunOptions, record: Record): void {
  const { firmware, drive, reference, supply, p, q, encoderStep, currentStep, sensorDelay, outerDelay } = options
  const { mode, W, D, K_pp, K_ip, K_pv, K_iv, K_pc, K_ic, omega_max, I_max, f_c, f_o } = firmware
  const { x } = drive
  const { i: atI, omegaLoad, thetaLoad } = drive.at
  const delta = options.encoderOnMotor ? drive.at.delta : -1
  const T_c = 1 / f_c
  const T_o = 1 / f_o
  const perWindow = 1 / (W * T_o)
  const positionMode = mode === 'position'
  const currentMode = mode === 'current'
  const stiff = supply.source_resistance === 0

  const read = (): number => {
    const theta = delta >= 0 ? x[thetaLoad] + x[delta] : x[thetaLoad]
    return encoderStep > 0 ? Math.floor(theta / encoderStep) * encoderStep : theta
  }
  const first = read()
  const window = new Float64Array(W).fill(first)
  // What the current task sampled at its last ticks; the outer task reads the oldest.
  const sensorLine = new Float64Array(sensorDelay).fill(first)
  const outerLine = new Float64Array(outerDelay + 1)
  const requestLine = new Float64Array(D + 1)
  let windowAt = 0
  let sensorAt = 0
  let outerAt = 0
  let requestAt = 0
  let x_p = 0
  let x_v = 0
  let x_c = 0
  let i_ref = 0
  let target = 0

  const outerTask = (t: number): void => {
    const theta = sensorDelay > 0 ? sensorLine[sensorAt] : read()
    target = reference(t)
    const omega = (theta - window[windowAt]) * perWindow
    window[windowAt] = theta
    windowAt = windowAt + 1 === W ? 0 : windowAt + 1
    let omega_ref = target
    if (positionMode) {
      const e = target - theta
      const integrated = x_p + K_ip * T_o * e
      omega_ref = K_pp * e + integrated
      if (Math.abs(omega_ref) > omega_max && e * omega_ref > 0) omega_ref = K_pp * e + x_p
      else x_p = integrated
    }
    omega_ref = omega_ref > omega_max ? omega_max : omega_ref < -omega_max ? -omega_max : omega_ref
    const e = omega_ref - omega
    const integrated = x_v + K_iv * T_o * e
    i_ref = K_pv * e + integrated
    if (Math.abs(i_ref) > I_max && e * i_ref > 0) i_ref = K_pv * e + x_v
    else x_v = integrated
    i_ref = i_ref > I_max ? I_max : i_ref < -I_max ? -I_max : i_ref
  }

  let now = 0
  let outerTick = 0
  for (let k = 0; k < record.count; k++) {
    const tick = k * q
    let nextOuter = outerTick * p
    while (!currentMode && nextOuter < tick) {
      drive.advance(nextOuter - now)
      now = nextOuter
      outerTask(outerTick * T_o)
      outerTick++
      nextOuter = outerTick * p
    }
    if (tick > now) drive.advance(tick - now)
    now = tick
    const i = x[atI]
    record.theta[k] = x[thetaLoad]
    record.omega[k] = x[omegaLoad]
    record.i[k] = i
    if (currentMode) {
      target = reference(k * T_c)
      i_ref = target > I_max ? I_max : target < -I_max ? -I_max : target
    } else if (nextOuter === tick) {
      outerTask(outerTick * T_o)
      outerTick++
    }
    record.reference[k] = target
    if (sensorDelay > 0) {
      sensorLine[sensorAt] = read()
      sensorAt = sensorAt + 1 === sensorDelay ? 0 : sensorAt + 1
    }

    let wanted = i_ref
    if (outerDelay > 0) {
      outerLine[outerAt] = i_ref
      outerAt = outerAt === outerDelay ? 0 : outerAt + 1
      wanted = outerLine[outerAt]
    }
    // The law's limit uses the bus voltage measured at the tick, with what was applied up to now still drawn.
    const e = wanted - (currentStep > 0 ? Math.round(i / currentStep) * currentStep : i)
    const effective = requestLine[requestAt]
    const V = stiff ? supply.V_bus : busVoltage(supply, effective, i)
    const limit = requestLimit(supply, V)
    const integrated = x_c + K_ic * T_c * e
    let u = K_pc * e + integrated
    if (Math.abs(u) > limit && e * u > 0) u = K_pc * e + x_c
    else x_c = integrated
    record.u[k] = u
    if (D === 0) {
      requestLine[0] = u
      drive.v = appliedVoltage(supply, u, stiff ? V : busVoltage(supply, u, i))
    } else {
      requestLine[requestAt] = u
      requestAt = requestAt + 1 === D + 1 ? 0 : requestAt + 1
      drive.v = appliedVoltage(supply, requestLine[requestAt], stiff ? V : busVoltage(supply, requestLine[requestAt], i))
    }
    record.v[k] = drive.v
  }
}
