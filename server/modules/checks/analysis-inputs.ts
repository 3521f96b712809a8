import type { DriveTrain } from '../../../shared/parameters/machine-set.ts'
import { nominal } from '../../../shared/parameters/quantity.ts'
import type { JointModel } from '../../control/model.ts'
import type { HeatInputs, StepInputs } from '../../jobs/analyses/requests.ts'
import type { RoleReader } from './joint-model.ts'

/** The step a check commands: the joint's own, else one that a joint of this mode can follow. rad, rad/s or A. */
export function stepInputsOf(d: DriveTrain, { firmware }: JointModel): StepInputs {
  const usual = { position: 0.1, velocity: Math.min(firmware.omega_max / 4, 1e6), current: Math.min(firmware.I_max / 4, 1e6) }
  // Backlash acts through the gear's stiffness; on a rigid drive train the finding says that it is not assessed.
  return { to: d.step ?? usual[firmware.mode], backlash: d.k_s === undefined ? 0 : (d.backlash ?? 0), source_resistance: d.source_resistance ?? 0 }
}

/** Thermal data of a drive train, or null where it has not enough for any statement. */
export function heatInputsOf(d: DriveTrain, role: RoleReader): HeatInputs | null {
  const { R_th, T_max } = d
  if (R_th === undefined || T_max === undefined) return null
  const R = nominal(d.R)
  const T_amb = d.T_amb ?? 25
  const number = (value: ReturnType<RoleReader>) => (typeof value === 'number' ? value : null)
  const currents = { continuous: number(role('current.continuous')), peak: number(role('current.limit')) }
  const { R_th_winding: R_wh, tau_th_winding: tau_w, tau_th: tau_h } = d
  if (R_wh !== undefined && tau_w !== undefined && tau_h !== undefined && R_wh < R_th)
    return { node: { R, R_wh, R_ha: R_th - R_wh, tau_w, tau_h, T_amb }, hasTime: true, T_max, ...currents }
  // The steady temperature follows from the resistances alone; without a time constant any stands in.
  return { node: { R, R_th, tau_th: tau_h ?? 1, T_amb }, hasTime: tau_h !== undefined, T_max, ...currents }
}
