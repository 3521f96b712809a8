import { nominal, type Quantity } from '../../../shared/parameters/quantity.ts'
import type { DriveTrain } from '../../../shared/parameters/machine-set.ts'
import type { ParameterSchema, ParameterValues } from '../../../shared/registers/parameter-schema.ts'
import type { Role } from '../../../shared/registers/roles.ts'
import { toSi } from '../../../shared/units/quantity.ts'
import type { ControlMode, Environment, Firmware, JointModel, Plant } from '../../control/model.ts'

/** What the board holds under a role, in SI; null when the firmware line has no such parameter. */
export type RoleReader = (role: Role) => number | boolean | string | null

/** A joint's model, with the values that come from its registers readable by role; or the roles that its analysis needed and did not find. */
export type ModelOfJoint = { kind: 'model'; model: JointModel; role: RoleReader } | { kind: 'missing'; roles: Role[]; role: RoleReader }

/** Reads decoded register values by role, units converted to SI; a gain that contains its period is divided by it. */
export function roleReader(schema: ParameterSchema, decoded: ParameterValues): RoleReader {
  const plain = (role: Role): number | boolean | string | null => {
    const parameter = schema.byRole.get(role)
    if (!parameter) return null
    const value = decoded[parameter.name] ?? parameter.constant ?? parameter.default
    if (typeof value !== 'number' || parameter.unit === null) return value
    return toSi(value, parameter.unit)
  }
  return (role) => {
    const value = plain(role)
    const per = schema.byRole.get(role)?.perTick
    if (typeof value !== 'number' || !per) return value
    const rate = plain(per === 'current' ? 'rate.current' : 'rate.outer')
    return typeof rate === 'number' ? value * rate : null
  }
}

const needed: Record<ControlMode, readonly Role[]> = {
  current: ['current.kp', 'current.ki', 'current.limit', 'rate.current', 'rate.outer'],
  velocity: ['velocity.kp', 'velocity.ki', 'velocity.window', 'speed.limit'],
  position: ['position.kp'],
}

const modes: readonly ControlMode[] = ['position', 'velocity', 'current']

/** The roles a mode's analysis can't do without. */
export const rolesNeeded = (mode: ControlMode): Role[] => [...needed.current, ...(mode === 'current' ? [] : needed.velocity), ...(mode === 'position' ? needed.position : [])]

/** Letters of a drive train at their nominal values. k_e follows k_t unless given. */
export function plantOf(d: DriveTrain): Plant {
  const of = (q: Quantity | undefined, otherwise: number) => (q === undefined ? otherwise : nominal(q))
  const k_t = nominal(d.k_t)
  const compliant = d.k_s !== undefined
  return {
    V_nom: d.V_nom,
    R: nominal(d.R),
    R_on: of(d.R_on, 0),
    L: nominal(d.L),
    k_t,
    k_e: of(d.k_e, k_t),
    N: d.N,
    eta: nominal(d.eta),
    J_rotor: nominal(d.J_rotor),
    J_load: nominal(d.J_load),
    b_rotor: of(d.b_rotor, 0),
    b_load: of(d.b_load, 0),
    k_s: compliant ? nominal(d.k_s!) : null,
    d_s: compliant ? of(d.d_s, 0) : null,
    tau_c: d.tau_c ?? 0,
    ...(d.tau_s === undefined ? {} : { tau_s: d.tau_s }),
    encoder: d.encoder,
    bits: d.bits,
    i_lsb: d.i_lsb,
  }
}

export const environmentOf = (d: DriveTrain): Environment => ({
  V_bus: d.V_bus === undefined ? d.V_nom : nominal(d.V_bus),
  T_winding: d.T_winding === undefined ? 25 : nominal(d.T_winding),
})

/** The cascade as the registers hold it, on its drive train. */
export function modelOfJoint(schema: ParameterSchema, decoded: ParameterValues, driveTrain: DriveTrain): ModelOfJoint {
  const role = roleReader(schema, decoded)
  const mode = modes.find((m) => m === role('control.mode')) ?? 'position'
  const missing = rolesNeeded(mode).filter((r) => typeof role(r) !== 'number')
  if (missing.length > 0) return { kind: 'missing', roles: missing, role }
  const number = (r: Role, otherwise: number) => {
    const value = role(r)
    return typeof value === 'number' ? value : otherwise
  }
  const compensated = role('supply.compensated')
  const firmware: Firmware = {
    mode,
    f_c: number('rate.current', 0),
    f_o: number('rate.outer', 0),
    W: number('velocity.window', 1),
    D: number('output.delay', 1),
    sensor_delay: driveTrain.sensor_delay ?? 0,
    outer_delay: 0,
    K_pp: number('position.kp', 0),
    K_ip: number('position.ki', 0),
    K_pv: number('velocity.kp', 0),
    K_iv: number('velocity.ki', 0),
    K_pc: number('current.kp', 0),
    K_ic: number('current.ki', 0),
    omega_max: number('speed.limit', Number.MAX_VALUE),
    I_max: number('current.limit', Number.MAX_VALUE),
    d_max: number('duty.limit', 1),
    supply_compensated: compensated === null || compensated === true,
  }
  const plant = plantOf(driveTrain)
  const supply = role('supply.nominal')
  return { kind: 'model', model: { plant: typeof supply === 'number' ? { ...plant, V_nom: supply } : plant, firmware, environment: environmentOf(driveTrain) }, role }
}
