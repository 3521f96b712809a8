import type { MapParameter } from '../../../shared/contract/checks.ts'
import { toPointer } from '../../../shared/parameters/paths.ts'
import type { MachineSet } from '../../../shared/parameters/machine-set.ts'
import type { Role } from '../../../shared/registers/roles.ts'
import { fromSi } from '../../../shared/units/quantity.ts'
import type { PreparedJoint, Side } from './prepare-check.ts'
import { pointerOf } from './resolve-joint.ts'

/** Letters of the firmware model and the roles that hold them. */
export const roleOfLetter: Partial<Record<MapParameter, Role>> = {
  K_pp: 'position.kp', K_ip: 'position.ki', K_pv: 'velocity.kp', K_iv: 'velocity.ki', K_pc: 'current.kp', K_ic: 'current.ki', W: 'velocity.window', D: 'output.delay', f_c: 'rate.current', f_o: 'rate.outer',
}

export const unitOfLetter: Record<MapParameter, string> = {
  K_pp: '1/s', K_ip: '1/s²', K_pv: 'A·s/rad', K_iv: 'A/rad', K_pc: 'V/A', K_ic: 'V/(A·s)', W: 'samples', D: 'ticks', f_c: 'Hz', f_o: 'Hz',
  R: 'Ω', R_on: 'Ω', L: 'H', k_t: 'N·m/A', k_e: 'V·s/rad', N: '', eta: '', J_rotor: 'kg·m²', J_load: 'kg·m²', b_rotor: 'N·m·s/rad', b_load: 'N·m·s/rad', k_s: 'N·m/rad', d_s: 'N·m·s/rad', V_bus: 'V', T_winding: '°C',
}

/** Where a letter's value stands in the set, and its factor from SI to the unit written there; null where nothing holds it. */
export function placeOfLetter(set: MachineSet, { joint, family }: PreparedJoint, side: Side & { kind: 'model' }, letter: MapParameter): { pointer: string; perSi: number } | null {
  const role = roleOfLetter[letter]
  if (!role) {
    const here = side.driveTrain[letter as keyof typeof side.driveTrain]
    const place = ['families', family, 'driveTrain', letter]
    return { pointer: toPointer(typeof here === 'object' ? [...place, 'value'] : place), perSi: 1 }
  }
  const parameter = side.schema.byRole.get(role)
  if (!parameter?.register) return null
  const own = pointerOf(set, joint, parameter.name)
  const pointer = own === toPointer(['joints', joint]) ? toPointer(['families', family, 'values', parameter.name]) : own
  const unit = parameter.unit === null ? 1 : fromSi(1, parameter.unit)
  const rate = parameter.perTick === 'current' ? side.model.firmware.f_c : parameter.perTick === 'outer' ? side.model.firmware.f_o : 1
  return { pointer, perSi: unit / rate }
}
